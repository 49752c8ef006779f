import { useVirtualizer } from '@tanstack/react-virtual';
import type { ReactNode, RefObject } from 'react';

/** As high as a row of one line; the real height is of no matter to what is in view. */
const rowHeight = 44;

/** Of very many rows those in view, with as much room above and below as the others would take. */
export function RowsInView({
  count,
  scroller,
  columns,
  row,
}: {
  count: number;
  /** What scrolls. */
  scroller: RefObject<HTMLElement | null>;
  columns: number;
  row: (index: number) => ReactNode;
}) {
  // eslint-disable-next-line react-hooks/incompatible-library -- the rule guards the React compiler, which this build does not use
  const virtual = useVirtualizer({
    count,
    getScrollElement: () => scroller.current,
    estimateSize: () => rowHeight,
    overscan: 12,
  });
  const items = virtual.getVirtualItems();
  return (
    <>
      <Spacer height={items.at(0)?.start ?? 0} columns={columns} />
      {items.map(({ index }) => row(index))}
      <Spacer height={virtual.getTotalSize() - (items.at(-1)?.end ?? 0)} columns={columns} />
    </>
  );
}

function Spacer({ height, columns }: { height: number; columns: number }) {
  if (height <= 0) return null;
  return (
    <tr aria-hidden="true">
      <td colSpan={columns} style={{ height }} className="p-0" />
    </tr>
  );
}
