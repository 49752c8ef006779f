import { Button } from '../../components/Button.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { useRecompute } from './queries.ts';

/** Asks for the last year to be recomputed; offered while nothing was. */
export function Recompute({ siteId }: { siteId: string }) {
  const asking = useRecompute(siteId);
  return (
    <section className="grid max-w-[44rem] gap-2" aria-label="Recompute past weeks">
      <h2 className="text-h2">A record of the weeks before</h2>
      <p className="text-ink2">
        The accepted logs reach back further than the first outlook. Past weeks can be recomputed from what was known at
        the time; it takes some minutes in the background.
      </p>
      <Button
        look="second"
        className="justify-self-start"
        busy={asking.isPending}
        busyText="Asking…"
        onClick={() => {
          asking.mutate(52);
        }}
      >
        Recompute the last year
      </Button>
      {asking.error ? <ProblemNotice error={asking.error} /> : null}
    </section>
  );
}
