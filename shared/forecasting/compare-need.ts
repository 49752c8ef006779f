import { mergeNeedParts } from './need-part.ts';
import type { NeedPart } from './need-part.ts';

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

function paired(count: number, differenceAt: (replication: number) => number): PairedDifference {
  let sum = 0;
  let squares = 0;
  for (let r = 0; r < count; r += 1) {
    const value = differenceAt(r);
    sum += value;
    squares += value * value;
  }
  const difference = sum / count;
  const variance = count > 1 ? Math.max(0, squares - count * difference * difference) / (count - 1) : 0;
  return { difference, se: Math.sqrt(variance / count) };
}

/**
 * Compares two simulations on common random numbers: the same plan, seed and replications, with and without a change.
 * Differences are taken replication by replication, so that what both share cancels.
 * @throws RangeError when the simulations are not of the same replications.
 */
export function compareNeed(asIs: readonly NeedPart[], changed: readonly NeedPart[]): NeedComparison {
  const a = mergeNeedParts(asIs);
  const b = mergeNeedParts(changed);
  if (a.fromReplication !== b.fromReplication || a.toReplication !== b.toReplication || a.areas !== b.areas) {
    throw new RangeError('compared simulations must hold the same replications and areas');
  }
  const count = a.toReplication - a.fromReplication;
  const rows = Array.from({ length: a.areas + 1 }, (_, row) => row);
  return {
    shiftShort: rows.map((row) =>
      Array.from({ length: a.shifts }, (_, shift) => {
        const from = (row * a.shifts + shift) * count;
        return paired(count, (r) => b.shortByReplication[from + r] - a.shortByReplication[from + r]);
      }),
    ),
    bedHoursShort: rows.map((row) =>
      paired(count, (r) => b.bedHoursShort[row * count + r] - a.bedHoursShort[row * count + r]),
    ),
  };
}
