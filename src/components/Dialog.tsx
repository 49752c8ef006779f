import { useEffect, useId, useRef } from 'react';
import type { ReactNode } from 'react';
import { Button } from './Button.tsx';

/** A question or a table over the page, by the browser's own dialog: it keeps the focus inside and Escape closes it. */
export function Dialog({
  title,
  open,
  onClose,
  children,
}: {
  title: string;
  open: boolean;
  onClose: () => void;
  children: ReactNode;
}) {
  const ref = useRef<HTMLDialogElement>(null);
  const titleId = useId();
  useEffect(() => {
    const dialog = ref.current;
    if (!dialog) return;
    if (open && !dialog.open) dialog.showModal();
    if (!open && dialog.open) dialog.close();
  }, [open]);
  return (
    <dialog
      ref={ref}
      aria-labelledby={titleId}
      onClose={onClose}
      className="m-auto max-h-[90dvh] w-[min(60rem,calc(100vw-2rem))] overflow-auto bg-paper p-6 text-ink backdrop:bg-scrim"
    >
      {open ? (
        <>
          <div className="mb-4 flex items-start justify-between gap-4">
            <h2 id={titleId} className="text-section">
              {title}
            </h2>
            <Button look="quiet" onClick={onClose}>
              Close
            </Button>
          </div>
          {children}
        </>
      ) : null}
    </dialog>
  );
}
