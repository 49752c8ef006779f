import { mergeNeedParts } from './need-part.ts';
import type { NeedPart } from './need-part.ts';
import { binSeconds } from './need-plan.ts';

/** A difference of plans, changed minus as is, with its standard error from differences paired by replication. */
export interface PairedDifference {
  difference: number;
  se: number;
}

/** How a change moves what matters, by area; the last row is the whole department ("some area" for chances). */
export interface NeedComparison {
  /** Change in the chance of any shortfall during each shift, [row][shift]. */
  shiftShort: PairedDifference[][];
  /** Change in bed-hours short, [row]. */
  bedHoursShort: PairedDifference[];
}

/** Sums over pairs of replications, one of each a cell, in whole units: no cut of the replications can change a digit. */
export interface PairedSums {
  /** What one unit is. */
  unit: number;
  asIs: Float64Array;
  changed: Float64Array;
  squares: Float64Array;
}

/**
 * What two simulations of the same replications have in common numbers, as sums: parts of any split add up, and nothing
 * else of the replications needs to be kept.
 */
export interface ComparedPart {
  fromReplication: number;
  toReplication: number;
  areas: number;
  shifts: number;
  hours: number;
  /** Any shortfall during each shift, [row · shifts + shift]. */
  shiftShort: PairedSums;
  /** Bed-hours short until the last hour, [row]. */
  bedHoursShort: PairedSums;
  /** Replications with need above staffed beds at each full hour, [area · hours + hour]. */
  hourAsIs: Int32Array;
  hourChanged: Int32Array;
  /** Patients who wait longer than the site's limit, [row · shifts + shift of arrival]; null where it has stated none. */
  waits: PairedSums | null;
}

function pairedSums(
  cells: number,
  count: number,
  asIs: ArrayLike<number>,
  changed: ArrayLike<number>,
  unit: number,
): PairedSums {
  const sums: PairedSums = {
    unit,
    asIs: new Float64Array(cells),
    changed: new Float64Array(cells),
    squares: new Float64Array(cells),
  };
  for (let cell = 0; cell < cells; cell += 1) {
    for (let at = cell * count; at < (cell + 1) * count; at += 1) {
      const before = Math.round(asIs[at] / unit);
      const after = Math.round(changed[at] / unit);
      const difference = after - before;
      sums.asIs[cell] += before;
      sums.changed[cell] += after;
      sums.squares[cell] += difference * difference;
    }
  }
  return sums;
}

/** Replications with need above the beds at each full hour. */
function hoursAbove(part: NeedPart, beds: readonly ArrayLike<number>[]): Int32Array {
  const { areas, hours, size, need } = part;
  const above = new Int32Array(areas * hours);
  for (let a = 0; a < areas; a += 1) {
    for (let h = 0; h < hours; h += 1) {
      const first = (a * hours + h) * size;
      for (let n = beds[a][h] + 1; n < size; n += 1) above[a * hours + h] += need[first + n];
    }
  }
  return above;
}

/**
 * Pairs two runs of the same replications, with and without a change.
 * @param beds staffed beds at each full hour by area, as they are and changed
 * @throws RangeError when the runs are not of the same replications and areas.
 */
export function comparePart(
  asIs: NeedPart,
  changed: NeedPart,
  beds: { asIs: readonly ArrayLike<number>[]; changed: readonly ArrayLike<number>[] },
): ComparedPart {
  const { fromReplication, toReplication, areas, shifts, hours } = asIs;
  if (
    fromReplication !== changed.fromReplication ||
    toReplication !== changed.toReplication ||
    areas !== changed.areas ||
    shifts !== changed.shifts
  ) {
    throw new RangeError('compared simulations must hold the same replications and areas');
  }
  const count = toReplication - fromReplication;
  const rows = areas + 1;
  return {
    fromReplication,
    toReplication,
    areas,
    shifts,
    hours,
    shiftShort: pairedSums(rows * shifts, count, asIs.shortByReplication, changed.shortByReplication, 1),
    bedHoursShort: pairedSums(rows, count, asIs.bedHoursShort, changed.bedHoursShort, binSeconds / 3600),
    hourAsIs: hoursAbove(asIs, beds.asIs),
    hourChanged: hoursAbove(changed, beds.changed),
    waits: null,
  };
}

function addUp(into: PairedSums, from: PairedSums): void {
  for (const key of ['asIs', 'changed', 'squares'] as const) {
    for (let i = 0; i < into[key].length; i += 1) into[key][i] += from[key][i];
  }
}

/** Adds parts up in the order of their replications. @throws RangeError when parts overlap or leave a hole. */
export function mergeCompared(parts: readonly ComparedPart[]): ComparedPart {
  const sorted = [...parts].sort((a, b) => a.fromReplication - b.fromReplication);
  if (sorted.length === 0) throw new RangeError('no parts to merge');
  const copy = (sums: PairedSums): PairedSums => ({
    unit: sums.unit,
    asIs: sums.asIs.slice(),
    changed: sums.changed.slice(),
    squares: sums.squares.slice(),
  });
  const first = sorted[0];
  const merged: ComparedPart = {
    ...first,
    shiftShort: copy(first.shiftShort),
    bedHoursShort: copy(first.bedHoursShort),
    hourAsIs: first.hourAsIs.slice(),
    hourChanged: first.hourChanged.slice(),
    waits: first.waits && copy(first.waits),
  };
  for (const part of sorted.slice(1)) {
    if (part.fromReplication !== merged.toReplication) {
      throw new RangeError(`replications ${merged.toReplication}..${part.fromReplication} are missing or double`);
    }
    merged.toReplication = part.toReplication;
    addUp(merged.shiftShort, part.shiftShort);
    addUp(merged.bedHoursShort, part.bedHoursShort);
    if (merged.waits && part.waits) addUp(merged.waits, part.waits);
    for (let i = 0; i < merged.hourAsIs.length; i += 1) {
      merged.hourAsIs[i] += part.hourAsIs[i];
      merged.hourChanged[i] += part.hourChanged[i];
    }
  }
  return merged;
}

/** The mean difference of one cell and its standard error over `count` pairs. */
export function pairedDifference(sums: PairedSums, cell: number, count: number): PairedDifference {
  const { unit } = sums;
  const difference = (sums.changed[cell] - sums.asIs[cell]) / count;
  const variance = count > 1 ? Math.max(0, sums.squares[cell] - count * difference * difference) / (count - 1) : 0;
  return { difference: difference * unit, se: Math.sqrt(variance / count) * unit };
}

/**
 * Compares two simulations on common random numbers: the same plan, seed and replications, with and without a change.
 * Differences are taken replication by replication, so that what both share cancels.
 * @throws RangeError when the simulations are not of the same replications.
 */
export function compareNeed(asIs: readonly NeedPart[], changed: readonly NeedPart[]): NeedComparison {
  const a = mergeNeedParts(asIs);
  const b = mergeNeedParts(changed);
  const none = Array.from({ length: a.areas }, () => new Int32Array(a.hours));
  const part = comparePart(a, b, { asIs: none, changed: none });
  const count = a.toReplication - a.fromReplication;
  const rows = Array.from({ length: a.areas + 1 }, (_, row) => row);
  return {
    shiftShort: rows.map((row) =>
      Array.from({ length: a.shifts }, (_, shift) => pairedDifference(part.shiftShort, row * a.shifts + shift, count)),
    ),
    bedHoursShort: rows.map((row) => pairedDifference(part.bedHoursShort, row, count)),
  };
}
