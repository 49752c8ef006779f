import { useEffect } from 'react';
import { useBlocker } from 'react-router-dom';
import { Button } from '../components/Button.tsx';
import { Dialog } from '../components/Dialog.tsx';
import { useWhatIsUnsaved } from '../lib/unsaved-work.ts';

/** Asks before a page with unsaved work is left, by a link, the back button, or by closing the tab. */
export function UnsavedGuard() {
  const unsaved = useWhatIsUnsaved();
  const blocker = useBlocker(({ currentLocation, nextLocation }) => {
    const saved = (nextLocation.state as { saved?: boolean } | null)?.saved === true;
    return unsaved !== null && !saved && currentLocation.pathname !== nextLocation.pathname;
  });

  useEffect(() => {
    if (unsaved === null) return;
    // The browser asks in words of its own.
    const ask = (event: BeforeUnloadEvent) => event.preventDefault();
    window.addEventListener('beforeunload', ask);
    return () => window.removeEventListener('beforeunload', ask);
  }, [unsaved]);

  return (
    <Dialog title="Leave this page?" open={blocker.state === 'blocked'} onClose={() => blocker.reset?.()}>
      <p className="text-ink2">You have {unsaved ?? 'unsaved work'}. If you leave, it is gone.</p>
      <div className="mt-4 flex flex-wrap gap-4">
        <Button onClick={() => blocker.reset?.()}>Stay on this page</Button>
        <Button look="second" onClick={() => blocker.proceed?.()}>
          Leave without saving
        </Button>
      </div>
    </Dialog>
  );
}
