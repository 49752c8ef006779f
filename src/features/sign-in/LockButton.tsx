import { useMutation, useQueryClient } from '@tanstack/react-query';
import { Button } from '../../components/Button.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { lockSession } from './lock-session.ts';
import { sessionKey } from './session.ts';

/** Locks the screen at once, for a shared workstation that is left for a minute; what was typed stays. */
export function LockButton({ className }: { className?: string }) {
  const queryClient = useQueryClient();
  const locking = useMutation({
    mutationFn: lockSession,
    onSuccess: () => queryClient.refetchQueries({ queryKey: sessionKey }),
  });
  return (
    <>
      <Button
        look="second"
        {...(className ? { className } : {})}
        busy={locking.isPending}
        busyText="Locking…"
        onClick={() => locking.mutate()}
      >
        Lock this screen
      </Button>
      {locking.error ? <ProblemNotice error={locking.error} className="mt-3" /> : null}
    </>
  );
}
