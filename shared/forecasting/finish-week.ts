import { engineVersion } from './engine-version.ts';
import { highestExcess } from './need-part.ts';
import { chanceAbove, histogramQuantile, smallestBeds } from './need-histogram.ts';
import type { WeekPart } from './record-week.ts';
import type { PreparedWeek } from './week-outlook.ts';
import type {
  AdmissionColumns,
  CountColumns,
  NeedColumns,
  WeekAreaOutlook,
  WeekDepartment,
  WeekNeedByHour,
  WeekOutlookResult,
  WeekShiftNeed,
} from './week-outlook-types.ts';

type Peak = WeekShiftNeed['peak'];

const shares = {
  p2_5: 0.025,
  p5: 0.05,
  p10: 0.1,
  p25: 0.25,
  p50: 0.5,
  p75: 0.75,
  p90: 0.9,
  p95: 0.95,
  p97_5: 0.975,
} as const;

function meanOf(counts: Int32Array): number {
  let total = 0;
  let sum = 0;
  counts.forEach((count, n) => {
    total += count;
    sum += n * count;
  });
  return Math.round((1000 * sum) / total) / 1000;
}

function peakOf(counts: Int32Array): Peak {
  const at = (key: keyof typeof shares): number => histogramQuantile(counts, shares[key]);
  return {
    mean: meanOf(counts),
    p2_5: at('p2_5'),
    p5: at('p5'),
    p10: at('p10'),
    p25: at('p25'),
    p50: at('p50'),
    p75: at('p75'),
    p90: at('p90'),
    p95: at('p95'),
    p97_5: at('p97_5'),
  };
}

function countColumns(rows: readonly Peak[]): CountColumns {
  const column = (key: keyof Peak): number[] => rows.map((row) => row[key]);
  return {
    mean: column('mean'),
    p2_5: column('p2_5'),
    p10: column('p10'),
    p25: column('p25'),
    p50: column('p50'),
    p75: column('p75'),
    p90: column('p90'),
    p97_5: column('p97_5'),
  };
}

function needColumns(rows: readonly Peak[]): NeedColumns {
  return { ...countColumns(rows), p5: rows.map(({ p5 }) => p5), p95: rows.map(({ p95 }) => p95) };
}

function rowOf(values: Int32Array, place: number, size: number): Int32Array {
  return values.subarray(place * size, (place + 1) * size);
}

/** By hour for one area, or for the department (`a` the number of areas). */
function byHour(
  part: WeekPart,
  a: number,
  staffed: number[],
  counts: Int32Array,
  size: number,
  first: number,
): WeekNeedByHour {
  const hours = staffed.length;
  const replications = part.toReplication - part.fromReplication;
  const share = (values: Int32Array): number[] => staffed.map((_, h) => values[a * hours + h] / replications);
  return {
    need: needColumns(staffed.map((_, h) => peakOf(rowOf(counts, first + h, size)))),
    staffed,
    shortfall: share(part.short),
    shortfallWithin: share(part.shortWithin),
  };
}

function admissionsOf(part: WeekPart, row: number, days: number): AdmissionColumns {
  const columns = (values: Int32Array): CountColumns =>
    countColumns(Array.from({ length: days }, (_, d) => peakOf(rowOf(values, row * days + d, part.daySize))));
  return { admittedLeaving: columns(part.admittedLeaving), arrivalsToAdmit: columns(part.arrivalsToAdmit) };
}

/** Fewest and most of the beds in some bins. */
function rangeOf(beds: Int32Array, from: number, to: number): { least: number; most: number } {
  let least = Infinity;
  let most = 0;
  for (let bin = from; bin < Math.max(to, from + 1); bin += 1) {
    const here = beds[Math.min(bin, beds.length - 1)];
    if (here < least) least = here;
    if (here > most) most = here;
  }
  return { least, most };
}

/** Steps of beds to add to the plan that bring the chance of any shortfall to the risk and the plan to the safe minimum. */
function bedsToAdd(
  excess: Int32Array,
  risk: number,
  { safeMinimum, bedStep }: { safeMinimum: number; bedStep: number },
  staffedLeast: number,
): number {
  let added = 0;
  while (staffedLeast + added < safeMinimum) added += bedStep;
  while (added < highestExcess && chanceAbove(excess, added).chance > risk) added += bedStep;
  return added;
}

function shiftNeed(prepared: PreparedWeek, part: WeekPart, a: number, s: number): WeekShiftNeed {
  const { input, plan } = prepared;
  const area = input.areas[a];
  const shift = input.shifts[s];
  const place = a * input.shifts.length + s;
  const counts = rowOf(part.shiftPeak, place, part.size);
  const excess = rowOf(part.shiftExcess, place, highestExcess + 1);
  const { least, most } = rangeOf(plan.areas[a].beds, plan.shiftFrom[s], plan.shiftTo[s]);
  const peak = peakOf(counts);
  const bedsForPlanningRisk = smallestBeds(counts, input.planningRisk);
  const above = Math.max(0, bedsForPlanningRisk - area.safeMinimum);
  const added = bedsToAdd(excess, input.planningRisk, area, least);
  const hours = (shift.to - Math.max(shift.from, input.issuedAt)) / 3600;
  return {
    peak,
    staffedLeast: least,
    staffedMost: most,
    someTime: chanceAbove(excess, 0).chance,
    headroom: least - peak.p90,
    bedsForPlanningRisk,
    bedsToStaff: area.safeMinimum + Math.ceil(above / area.bedStep) * area.bedStep,
    bedsToAdd: added,
    bedsThatDoNotExist: added === 0 ? 0 : Math.min(added, Math.max(0, most + added - area.spaces)),
    someTimeWithEverySpace: chanceAbove(counts, area.spaces).chance,
    nurseHours: area.bedsPerNurse === null ? null : (added * hours) / area.bedsPerNurse,
    lastChanceAt: Math.round(shift.from - Math.max(shift.leadTimeHours ?? 0, area.noticeHours) * 3600),
  };
}

function areaOutlook(prepared: PreparedWeek, part: WeekPart, a: number): WeekAreaOutlook {
  const { input, plan, days } = prepared;
  const hours = input.hours.length;
  const staffed = Array.from(plan.hourTo, (to) => plan.areas[a].beds[to - 1]);
  return {
    areaId: input.areas[a].areaId,
    counted: input.areas[a].census !== null,
    ...byHour(part, a, staffed, part.need, part.size, a * hours),
    shifts: input.shifts.map((_, s) => shiftNeed(prepared, part, a, s)),
    admissions: admissionsOf(part, a, days.length),
  };
}

function department(prepared: PreparedWeek, part: WeekPart, areas: readonly WeekAreaOutlook[]): WeekDepartment {
  const { input, plan, days } = prepared;
  const replications = part.toReplication - part.fromReplication;
  const staffed = input.hours.map((_, h) => areas.reduce((sum, area) => sum + area.staffed[h], 0));
  const beds = Int32Array.from({ length: plan.bins }, (_, b) =>
    plan.areas.reduce((sum, area) => sum + area.beds[b], 0),
  );
  return {
    pooled: byHour(part, areas.length, staffed, part.pooledNeed, part.pooledSize, 0),
    someAreaShort: Array.from(part.someShort, (count) => count / replications),
    shifts: input.shifts.map((_, s) => {
      const { least, most } = rangeOf(beds, plan.shiftFrom[s], plan.shiftTo[s]);
      return {
        peak: peakOf(rowOf(part.pooledPeak, s, part.pooledSize)),
        staffedLeast: least,
        staffedMost: most,
        someAreaShort: part.someShortByShift[s] / replications,
        pooledShort: part.pooledShort[s] / replications,
      };
    }),
    admissions: admissionsOf(part, areas.length, days.length),
  };
}

/** The part of a week outlook's result that the simulation answers. @throws RangeError unless the part holds every replication. */
export function finishWeek(
  prepared: PreparedWeek,
  part: WeekPart,
): Omit<WeekOutlookResult, 'arrivals' | 'calendar' | 'ordinaryWeek' | 'waits'> {
  const { input } = prepared;
  if (part.fromReplication !== 0 || part.toReplication !== input.replications) {
    throw new RangeError(`parts hold replications ${part.fromReplication}..${part.toReplication}`);
  }
  const areas = input.areas.map((_, a) => areaOutlook(prepared, part, a));
  return {
    engineVersion,
    replications: input.replications,
    planningRisk: input.planningRisk,
    hours: [...input.hours],
    shifts: input.shifts.map(({ name, from, to }) => ({ name, from, to })),
    days: prepared.days,
    areas,
    department: department(prepared, part, areas),
    lengthOfStay: prepared.lengthOfStay,
  };
}
