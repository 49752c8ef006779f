import type { Subscription } from '../../../shared/api/brief-recipients.ts';
import { Button } from '../../components/Button.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';

/** Whether the brief comes to oneself, and a press that changes it. */
export function OwnSubscription({
  subscription,
  saving,
  error,
  onChange,
}: {
  subscription: Subscription;
  saving: boolean;
  error: unknown;
  onChange: (subscribed: boolean) => void;
}) {
  const { subscribed, address } = subscription;
  return (
    <section className="grid gap-2" aria-labelledby="own-subscription">
      <h2 id="own-subscription" className="text-section">
        Your own subscription
      </h2>
      <p className="text-ink2" aria-live="polite">
        {subscribed ? 'The brief comes to you each week, to ' : 'The brief does not come to you. It would go to '}
        <b className="text-ink">{address}</b>.
      </p>
      {error ? <ProblemNotice error={error} /> : null}
      <Button
        look="second"
        className="justify-self-start"
        busy={saving}
        busyText="Saving…"
        onClick={() => onChange(!subscribed)}
      >
        {subscribed ? 'Unsubscribe' : 'Subscribe'}
      </Button>
    </section>
  );
}
