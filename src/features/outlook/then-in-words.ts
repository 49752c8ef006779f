import { formatList, formatTime } from '../../lib/format.ts';
import type { Board } from './tonight-board.ts';

/**
 * What happened in the hours that an earlier outlook spoke of, area by area, as far as a census or a log
 * tells: how many of its hours are known, and at which of these more patients were present than beds staffed.
 */
export function thenInWords(board: Board, timeZone: string): string[] {
  const isKnown = board.areas.some(({ columns }) =>
    columns.some((column) => column.kind === 'forecast' && typeof column.actual === 'number'),
  );
  if (!isKnown) return ['Nothing is known yet of the hours since: no census and no log speaks of them.'];
  return board.areas.map(({ area, columns }) => {
    const known = columns.flatMap((column) =>
      column.kind === 'forecast' && typeof column.actual === 'number' ? [{ ...column, actual: column.actual }] : [],
    );
    if (known.length === 0) return `${area.name}: nothing is known of the hours since.`;
    const short = known.filter((column) => column.actual > column.staffed);
    const hours = `${String(known.length)} ${known.length === 1 ? 'hour' : 'hours'} known`;
    if (short.length === 0) return `${area.name}: short at none of ${hours}.`;
    const named = short.slice(0, 6).map(({ at, actual, staffed }) => {
      return `${formatTime(at, timeZone)} (${String(actual)} present, ${String(staffed)} staffed)`;
    });
    const rest = short.length > named.length ? [`${String(short.length - named.length)} more`] : [];
    return `${area.name}: short at ${formatList([...named, ...rest])}, of ${hours}.`;
  });
}
