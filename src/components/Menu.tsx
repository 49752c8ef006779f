import { useEffect, useId, useRef, useState } from 'react';
import type { ReactNode } from 'react';

/** A button that opens a list of places beneath it; Escape, a press outside or leaving by keyboard closes it. */
export function Menu({ label, children }: { label: ReactNode; children: ReactNode }) {
  const [open, setOpen] = useState(false);
  const id = useId();
  const ref = useRef<HTMLDivElement>(null);
  const buttonRef = useRef<HTMLButtonElement>(null);

  useEffect(() => {
    if (!open) return;
    const handlePress = (event: PointerEvent) => {
      if (!ref.current?.contains(event.target as Node)) setOpen(false);
    };
    document.addEventListener('pointerdown', handlePress);
    return () => document.removeEventListener('pointerdown', handlePress);
  }, [open]);

  return (
    <div
      ref={ref}
      className="relative"
      onKeyDown={(event) => {
        if (event.key === 'Escape' && open) {
          setOpen(false);
          buttonRef.current?.focus();
        }
      }}
      onBlur={(event) => {
        if (event.relatedTarget && !ref.current?.contains(event.relatedTarget)) setOpen(false);
      }}
    >
      <button
        ref={buttonRef}
        type="button"
        aria-expanded={open}
        aria-controls={id}
        className="link min-h-11 cursor-pointer font-semibold text-ink2"
        onClick={() => setOpen(!open)}
      >
        {label}
      </button>
      <div
        id={id}
        hidden={!open}
        onClick={(event) => {
          if ((event.target as Element).closest('a, button')) setOpen(false);
        }}
        className="absolute right-0 z-30 mt-1 min-w-60 border-t-[3px] border-ink bg-paper p-4 text-left"
      >
        {children}
      </div>
    </div>
  );
}
