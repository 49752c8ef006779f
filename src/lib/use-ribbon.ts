import { useCallback, useEffect, useLayoutEffect, useRef, useState } from 'react';
import type { KeyboardEvent } from 'react';

const stepHours = 6;

/** Steps the ribbon of hours: by button, arrow keys, touch. The first view starts a few hours before now. */
export function useRibbon(columnWidth: number, columnsBeforeView: number, key: unknown) {
  const ref = useRef<HTMLDivElement>(null);
  const [place, setPlace] = useState({ atStart: false, atEnd: false, moved: false });
  const home = columnsBeforeView * columnWidth;

  const read = useCallback(() => {
    const board = ref.current;
    if (!board) return;
    const next = {
      atStart: board.scrollLeft <= 1,
      atEnd: board.scrollLeft + board.clientWidth >= board.scrollWidth - 1,
      moved: Math.abs(board.scrollLeft - home) > 4,
    };
    setPlace((last) =>
      last.atStart === next.atStart && last.atEnd === next.atEnd && last.moved === next.moved ? last : next,
    );
  }, [home]);

  // Now stands at its place before the first paint, and again when the hour or the width changes.
  useLayoutEffect(() => {
    if (ref.current) ref.current.scrollLeft = home;
    read();
  }, [home, key, read]);

  useEffect(() => {
    const board = ref.current;
    if (!board) return;
    board.addEventListener('scroll', read, { passive: true });
    window.addEventListener('resize', read);
    return () => {
      board.removeEventListener('scroll', read);
      window.removeEventListener('resize', read);
    };
  }, [read]);

  const scroll = (left: number) => ref.current?.scrollTo({ left, behavior: motion() });
  const by = (hours: number) => {
    const board = ref.current;
    if (!board) return;
    scroll((Math.round(board.scrollLeft / columnWidth) + hours) * columnWidth);
  };

  function handleKeyDown(event: KeyboardEvent<HTMLElement>) {
    // Arrow keys inside a field move within the field.
    if (event.target instanceof HTMLElement && event.target.matches('input, select, textarea')) return;
    if (event.key === 'ArrowRight') by(1);
    else if (event.key === 'ArrowLeft') by(-1);
    else if (event.key === 'Home') scroll(home);
    else if (event.key === 'End') scroll(ref.current?.scrollWidth ?? 0);
    else return;
    event.preventDefault();
  }

  return {
    ref,
    place,
    earlier: () => by(-stepHours),
    later: () => by(stepHours),
    backToNow: () => scroll(home),
    handleKeyDown,
  };
}

function motion(): ScrollBehavior {
  return window.matchMedia('(prefers-reduced-motion: reduce)').matches ? 'auto' : 'smooth';
}
