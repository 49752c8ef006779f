import type { ReactNode } from 'react';
import { classNames } from '../lib/class-names.ts';

/**
 * One row of the board: the gutter stays while the hours slide under it. On a phone the gutter
 * stands above its strip and keeps to the screen's width.
 */
export function BoardRow({
  gutter,
  strip,
  ruled = true,
  className,
}: {
  gutter: ReactNode;
  strip: ReactNode;
  /** A rule in the gutter above the row. */
  ruled?: boolean;
  className?: string;
}) {
  return (
    <section className={classNames('flex flex-col sm:flex-row', className)}>
      <div className="sticky left-0 z-20 print:relative w-screen shrink-0 bg-water pl-page max-sm:pr-page sm:w-[calc(var(--gutter)+var(--page-pad))] sm:pr-4">
        <div className={classNames('h-full pt-2 pb-2', ruled && 'border-t border-hair')}>{gutter}</div>
      </div>
      <div className="board-strip relative">{strip}</div>
    </section>
  );
}
