import { useMutation } from '@tanstack/react-query';
import { Button } from '../../components/Button.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { signOutEverywhere } from './sign-out.ts';

/** Ends every session of the person, for instance after a screen was left open somewhere. */
export function SignOutEverywhere() {
  const leaving = useMutation({ mutationFn: signOutEverywhere });
  return (
    <>
      <Button
        look="quiet"
        className="mt-3"
        busy={leaving.isPending || leaving.isSuccess}
        busyText="Signing out…"
        onClick={() => leaving.mutate()}
      >
        Sign out on every device
      </Button>
      {leaving.error ? <ProblemNotice error={leaving.error} className="mt-3" /> : null}
    </>
  );
}
