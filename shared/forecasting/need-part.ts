import type { NeedPlan } from './need-plan.ts';

/** Room for short excesses: needs over beds by more than this count as this. */
export const highestExcess = 63;

/**
 * Counts from a run of replications: plain typed arrays, so that a thread can hand them over, and sums of parts are the
 * whole whichever way it was split.
 */
export interface NeedPart {
  fromReplication: number;
  toReplication: number;
  areas: number;
  hours: number;
  shifts: number;
  /** Room of the histograms of need, for one area and for all pooled. */
  size: number;
  pooledSize: number;
  /** [(area · hours + hour) · size + need] at the full hour. */
  need: Int32Array;
  pooledNeed: Int32Array;
  /** [(area · hours + hour) · (highestExcess + 1) + excess]: most by which need exceeded beds within the hour. */
  within: Int32Array;
  pooledWithin: Int32Array;
  /** [(area · shifts + shift) · size + need]: highest need in what is left of the shift. */
  shiftPeak: Int32Array;
  /** [area · shifts + shift]: replications with any shortfall in the shift; the pooled row is "some area". */
  shiftShort: Int32Array;
  /** [hour]: replications with some area short at the full hour. */
  someShort: Int32Array;
  /** [area · size + need]: highest need until the end of the night. */
  peak: Int32Array;
  /** [(area · hours + hour) · flowSize + count]. */
  flowSize: number;
  admittedLeaving: Int32Array;
  arrivalsToAdmit: Int32Array;
  /** [(area · hours + hour) · boarderSize + k]: of the replications short at the full hour (within the hour where the area prints that), fewest of the counted boarders who, gone, end it; last: not even all of them. */
  boarderSize: number;
  boardersNeeded: Int32Array;
  /** 1 where a replication was short in a shift, [(area · shifts + shift) · replications + replication − from]; the pooled row is "some area". */
  shortByReplication: Uint8Array;
  /** Bed-hours short until the last hour, [area · replications + replication − from]; the pooled row is the areas' sum. */
  bedHoursShort: Float32Array;
  /** Patients simulated: those present and newcomers. */
  patients: number;
}

/** An empty part for replications [from, to). */
export function makeNeedPart(plan: NeedPlan, from: number, to: number): NeedPart {
  const areas = plan.areas.length;
  const hours = plan.hourFrom.length;
  const shifts = plan.shiftFrom.length;
  const size = plan.areas.reduce((sum, area) => Math.max(sum, area.highest), 0) + 1;
  const pooledSize = plan.areas.reduce((sum, area) => sum + area.highest, 0) + 1;
  const boarderSize = plan.areas.reduce((most, area) => Math.max(most, area.boarders), 0) + 2;
  const flowSize = Math.min(size, 64);
  return {
    fromReplication: from,
    toReplication: to,
    areas,
    hours,
    shifts,
    size,
    pooledSize,
    need: new Int32Array(areas * hours * size),
    pooledNeed: new Int32Array(hours * pooledSize),
    within: new Int32Array(areas * hours * (highestExcess + 1)),
    pooledWithin: new Int32Array(hours * (highestExcess + 1)),
    shiftPeak: new Int32Array(areas * shifts * size),
    shiftShort: new Int32Array((areas + 1) * shifts),
    someShort: new Int32Array(hours),
    peak: new Int32Array(areas * size),
    flowSize,
    admittedLeaving: new Int32Array(areas * hours * flowSize),
    arrivalsToAdmit: new Int32Array(areas * hours * flowSize),
    boarderSize,
    boardersNeeded: new Int32Array(areas * hours * boarderSize),
    shortByReplication: new Uint8Array((areas + 1) * shifts * (to - from)),
    bedHoursShort: new Float32Array((areas + 1) * (to - from)),
    patients: 0,
  };
}

const summed = [
  'need',
  'pooledNeed',
  'within',
  'pooledWithin',
  'shiftPeak',
  'shiftShort',
  'someShort',
  'peak',
  'admittedLeaving',
  'arrivalsToAdmit',
  'boardersNeeded',
] as const;

/**
 * Adds parts up. The result does not depend on how the replications were split or in which order parts arrived.
 * @throws RangeError when parts overlap, leave a hole or come from different plans.
 */
export function mergeNeedParts(parts: readonly NeedPart[]): NeedPart {
  if (parts.length === 0) throw new RangeError('no parts to merge');
  const sorted = [...parts].sort((a, b) => a.fromReplication - b.fromReplication);
  const first = sorted[0];
  const last = sorted[sorted.length - 1];
  sorted.forEach((part, i) => {
    if (i > 0 && part.fromReplication !== sorted[i - 1].toReplication) {
      throw new RangeError(
        `replications ${sorted[i - 1].toReplication}..${part.fromReplication} are missing or double`,
      );
    }
    if (part.need.length !== first.need.length || part.boardersNeeded.length !== first.boardersNeeded.length) {
      throw new RangeError('parts come from different plans');
    }
  });
  const rows = first.areas + 1;
  const total = last.toReplication - first.fromReplication;
  const merged: NeedPart = {
    ...first,
    toReplication: last.toReplication,
    shortByReplication: new Uint8Array(rows * first.shifts * total),
    bedHoursShort: new Float32Array(rows * total),
    patients: sorted.reduce((sum, part) => sum + part.patients, 0),
  };
  for (const key of summed) {
    const sum = new Int32Array(first[key].length);
    for (const part of sorted) for (let i = 0; i < sum.length; i += 1) sum[i] += part[key][i];
    merged[key] = sum;
  }
  for (const part of sorted) {
    const count = part.toReplication - part.fromReplication;
    const at = part.fromReplication - first.fromReplication;
    for (let row = 0; row < rows * first.shifts; row += 1) {
      const own = part.shortByReplication.subarray(row * count, (row + 1) * count);
      merged.shortByReplication.set(own, row * total + at);
    }
    for (let row = 0; row < rows; row += 1) {
      merged.bedHoursShort.set(part.bedHoursShort.subarray(row * count, (row + 1) * count), row * total + at);
    }
  }
  return merged;
}
