import { useMutation } from '@tanstack/react-query';
import { Button } from '../../components/Button.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { signOut } from './sign-out.ts';

/** Ends the session. */
export function SignOutButton({ className }: { className?: string }) {
  const leaving = useMutation({ mutationFn: signOut });
  return (
    <>
      <Button
        look="second"
        {...(className ? { className } : {})}
        busy={leaving.isPending || leaving.isSuccess}
        busyText="Signing out…"
        onClick={() => leaving.mutate()}
      >
        Sign out
      </Button>
      {leaving.error ? <ProblemNotice error={leaving.error} className="mt-3" /> : null}
    </>
  );
}
