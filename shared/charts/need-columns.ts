/** One hour of a drawing, at its full hour. */
export type NeedColumn = { at: number; staffed: number } & (
  | {
      kind: 'past';
      /** Patients present; null where neither a census nor a log speaks. */
      present: number | null;
    }
  | {
      kind: 'forecast';
      p5: number;
      p25: number;
      p50: number;
      p75: number;
      p90: number;
      p95: number;
      /** What was there when the hour came, for an earlier outlook; null where neither a census nor a log speaks. */
      actual?: number | null;
    }
);

export interface StaffedStep {
  at: number;
  beds: number;
}

export interface NeedStripProps {
  /** Unique on the page: names the drawing's patterns. */
  id: string;
  columns: readonly NeedColumn[];
  /** Staffed beds as steps at their true times; the first at or before the first column. */
  staffed: readonly StaffedStep[];
  /** What the staffed line counts, for its labels. */
  unit?: string;
  columnWidth: number;
  height: number;
  /** A taller drawing with heavier line, median and named percentiles. */
  tall?: boolean;
  /** False: no census; the forecast is an outline. */
  counted: boolean;
  /** Present now, printed at the last counted column. */
  presentNow?: number | null;
  /** The board is that of an earlier time: what was present is said to be so then. */
  then?: boolean;
  /** Names P90 and P95 in the drawing. */
  namePercentiles?: boolean;
}

export interface Band {
  /** Need at the lower and the upper edge. */
  from: number;
  to: number;
  /** 1 sure .. 5 unsure. */
  certainty: 1 | 2 | 3 | 4 | 5;
  /** Above the staffed beds. */
  short: boolean;
}

/**
 * A forecast column as bands from 0 to P95, sure to unsure; a band that passes the staffed beds is
 * cut in two there. Empty bands are left out.
 */
export function bandsOf(column: NeedColumn & { kind: 'forecast' }): Band[] {
  const edges = [0, column.p5, column.p25, column.p50, column.p75, column.p95];
  const bands: Band[] = [];
  for (let index = 1; index < edges.length; index += 1) {
    const certainty = index as Band['certainty'];
    const from = edges[index - 1];
    const to = edges[index];
    const cut = Math.min(to, Math.max(from, column.staffed));
    if (cut > from) bands.push({ from, to: cut, certainty, short: false });
    if (to > cut) bands.push({ from: cut, to, certainty, short: true });
  }
  return bands;
}

/**
 * Where an instant lies along the columns, in columns from the first's left edge. A column holds
 * the time until the next full hour, an hour as a rule and more or less when the clocks change.
 */
export function placeOf(columns: readonly { at: number }[], at: number): number {
  if (columns.length === 0 || at <= columns[0].at) return 0;
  const last = columns.length - 1;
  if (at >= columns[last].at) return Math.min(columns.length, last + (at - columns[last].at) / 3600);
  const next = columns.findIndex((column) => column.at > at);
  const from = columns[next - 1].at;
  return next - 1 + (at - from) / (columns[next].at - from);
}

/**
 * Scale of a drawing: from 0 for a short strip; a tall one may cut its foot off where nothing
 * changes, and then fades there so that no false base is drawn.
 */
export function needDomain(
  columns: readonly NeedColumn[],
  mayCut: boolean,
): { low: number; high: number; cut: boolean } {
  const tops = columns.map((column) =>
    Math.max(column.staffed, column.kind === 'past' ? (column.present ?? 0) : Math.max(column.p95, column.actual ?? 0)),
  );
  const feet = columns.flatMap((column) =>
    column.kind === 'past'
      ? column.present === null
        ? []
        : [column.present]
      : [Math.min(column.p5, column.actual ?? Infinity)],
  );
  const high = Math.max(1, ...tops);
  const lowest = Math.min(high, ...feet);
  const low = mayCut ? Math.floor(lowest - (high - lowest) * 0.35) : 0;
  return low >= 4 ? { low, high, cut: true } : { low: 0, high, cut: false };
}

/**
 * Where a need lies in a drawing, px from its upper edge: `low` at `foot`, `high` at `top`, straight between them. Written
 * out because it stands on the night's first view: a scale that can also be of colours and dates weighs 11 kB there.
 */
export function needScale(low: number, high: number, foot: number, top: number): (need: number) => number {
  return (need) => foot + ((need - low) / (high - low)) * (top - foot);
}
