import { useEffect, useRef, useState } from 'react';
import type { KeyboardEvent, PointerEvent, ReactNode } from 'react';
import { classNames } from '../lib/class-names.ts';

/** What one column of a drawing says. */
export interface Reading {
  /** "21:00" */
  name: string;
  /** "24 needed (22 to 28), 26 staffed" */
  text: string;
  /** Where a column begins and how wide it is, px, where they are not all alike. */
  x?: number;
  width?: number;
}

/** The widest that the words beside a column get, px. */
const sayWidth = 236;

/**
 * Lets a drawing of columns be read figure by figure: the pointer, a touch or, once it has the focus, the arrow keys bring
 * up a column's figures beside it; Escape puts them away. A screen reader hears each as a slider's value.
 */
export function ChartReader({
  label,
  readings,
  columnWidth,
  start = 0,
  first = 0,
  top = 0,
  onOpen,
  children,
}: {
  /** What the drawing shows: "Acute, need by hour". */
  label: string;
  /** One a column, in order. */
  readings: readonly Reading[];
  columnWidth: number;
  /** Where the first column begins, px from the drawing's left edge. */
  start?: number;
  /** The column that the keyboard begins with. */
  first?: number;
  /** How far beneath the drawing's upper edge the words stand, px. */
  top?: number;
  /** Where a press on a column, or Enter, leads; a link to the same stands elsewhere. */
  onOpen?: (index: number) => void;
  children: ReactNode;
}) {
  const ref = useRef<HTMLDivElement>(null);
  const [at, setAt] = useState<number | null>(null);
  const last = readings.length - 1;
  const [keyAt, setKeyAt] = useState(first);
  const chosen = at === null || at > last ? null : readings[at];
  const current = Math.min(last, Math.max(0, at ?? keyAt));

  const leftOf = (index: number) => start + (readings[index].x ?? index * columnWidth);
  const widthOf = (index: number) => readings[index].width ?? columnWidth;

  // WCAG 1.4.13: put away without moving the pointer.
  useEffect(() => {
    if (at === null) return;
    const press = (event: globalThis.KeyboardEvent) => {
      if (event.key === 'Escape') setAt(null);
    };
    document.addEventListener('keydown', press);
    return () => document.removeEventListener('keydown', press);
  }, [at]);

  function point(event: PointerEvent<HTMLElement>) {
    const box = ref.current?.getBoundingClientRect();
    if (!box) return;
    const x = event.clientX - box.left;
    const column = readings.findIndex((_, index) => x >= leftOf(index) && x < leftOf(index) + widthOf(index));
    setAt(column < 0 ? null : column);
  }

  function step(event: KeyboardEvent) {
    if (event.key === 'Enter') onOpen?.(current);
    const next = {
      ArrowLeft: current - 1,
      ArrowRight: current + 1,
      ArrowDown: current - 1,
      ArrowUp: current + 1,
      Home: 0,
      End: last,
    }[event.key];
    if (next === undefined) return;
    // The hours themselves do not slide on while one of them is read.
    event.preventDefault();
    event.stopPropagation();
    const bounded = Math.min(last, Math.max(0, next));
    setKeyAt(bounded);
    setAt(bounded);
    ref.current?.querySelector('[data-guide]')?.scrollIntoView({ inline: 'nearest', block: 'nearest' });
  }

  if (readings.length === 0) return children;
  const left = leftOf(current);
  const wide = widthOf(current);
  // Words stand right of their column, or left of it where the drawing ends.
  const onLeft = left + wide + sayWidth > leftOf(last) + widthOf(last) && left > sayWidth;
  return (
    <div
      ref={ref}
      className={classNames('relative w-max touch-pan-x touch-pan-y print:contents', onOpen && 'cursor-pointer')}
      role="slider"
      tabIndex={0}
      aria-label={`${label}: figures`}
      aria-valuemin={0}
      aria-valuemax={last}
      aria-valuenow={current}
      aria-valuetext={`${readings[current].name}: ${readings[current].text}`}
      onPointerMove={point}
      onPointerDown={point}
      onPointerLeave={() => setAt(null)}
      onClick={() => {
        if (at !== null) onOpen?.(at);
      }}
      onFocus={(event) => {
        if (event.target === ref.current && ref.current.matches(':focus-visible')) setAt(current);
      }}
      onBlur={() => setAt(null)}
      onKeyDown={step}
    >
      {children}
      {chosen ? (
        <div aria-hidden="true" className="pointer-events-none print:hidden" data-picture="none">
          <div
            data-guide
            className="absolute inset-y-0 border-x border-act"
            style={{ left, width: Math.max(2, wide - 1) }}
          />
          <div
            className="absolute z-20 border-t-[3px] border-act bg-paper px-2.5 py-1.5 text-quiet text-ink2"
            style={{
              top,
              maxWidth: sayWidth,
              width: 'max-content',
              ...(onLeft ? { left: left - 6, transform: 'translateX(-100%)' } : { left: left + wide + 5 }),
            }}
          >
            <b className="block text-ink">{chosen.name}</b>
            {chosen.text}
          </div>
        </div>
      ) : null}
    </div>
  );
}
