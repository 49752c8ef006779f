import { engineVersion } from './engine-version.ts';
import { chanceAbove, chanceOf, histogramQuantile, percentilesOf, smallestBeds } from './need-histogram.ts';
import { highestExcess, mergeNeedParts } from './need-part.ts';
import type { NeedPart } from './need-part.ts';
import type { NeedPlan } from './need-plan.ts';
import type {
  AreaOutlook,
  Chance,
  NeedByHour,
  OutlookInput,
  OutlookResult,
  PercentilesByHour,
  ShiftRisk,
} from './outlook-types.ts';
import { smallAreaSpaces } from './printed-shortfall.ts';

type InputArea = OutlookInput['areas'][number];

function slice(values: Int32Array, place: number, size: number): Int32Array {
  return values.subarray(place * size, (place + 1) * size);
}

/** By hour for one area, or for all pooled (`a` null). */
function byHour(part: NeedPart, a: number | null, staffed: number[], risk: number): NeedByHour {
  const { hours } = part;
  const [counts, size, over] =
    a === null ? [part.pooledNeed, part.pooledSize, part.pooledWithin] : [part.need, part.size, part.within];
  const first = (a ?? 0) * hours;
  const laws = Array.from({ length: hours }, (_, h) => slice(counts, first + h, size));
  const excess = Array.from({ length: hours }, (_, h) => slice(over, first + h, highestExcess + 1));
  const need = percentilesOf(laws);
  return {
    need,
    staffed,
    shortfall: laws.map((law, h) => chanceAbove(law, staffed[h])),
    shortfallWithin: excess.map((law) => chanceAbove(law, 0)),
    headroom: staffed.map((beds, h) => beds - need.p90[h]),
    bedsNeeded: laws.map((law) => smallestBeds(law, risk)),
  };
}

function flows(values: Int32Array, area: number, part: NeedPart): PercentilesByHour {
  const { hours, flowSize } = part;
  return percentilesOf(Array.from({ length: hours }, (_, h) => slice(values, area * hours + h, flowSize)));
}

/** Whole steps from the safe minimum up to at least `beds`. */
function inSteps(beds: number, area: InputArea): number {
  const above = Math.max(0, beds - area.safeMinimum);
  return area.safeMinimum + Math.ceil(above / area.bedStep) * area.bedStep;
}

/** Steps of beds to add so that the chance, as printed for the area, comes to its limit; `most` added by any law. */
function addedBeds(chance: (added: number) => number, area: InputArea, most: number): number {
  let added = 0;
  while (added < most && chance(added) > area.alertLimit) added += area.bedStep;
  return added;
}

function shiftsOf(part: NeedPart, a: number, input: OutlookInput): ShiftRisk[] {
  const area = input.areas[a];
  const replications = part.toReplication - part.fromReplication;
  return input.shifts.map(({ name, from, to }, s) => {
    const peak = slice(part.shiftPeak, a * part.shifts + s, part.size);
    const bedsForPlanningRisk = smallestBeds(peak, input.planningRisk);
    const bedsToStaff = inSteps(bedsForPlanningRisk, area);
    return {
      name,
      from,
      to,
      someTime: chanceOf(part.shiftShort[a * part.shifts + s], replications),
      bedsForPlanningRisk,
      bedsForAlertLimit: smallestBeds(peak, area.alertLimit),
      bedsToStaff,
      bedsThatDoNotExist: Math.max(0, bedsToStaff - area.spaces),
      someTimeWithEverySpace: chanceAbove(peak, area.spaces),
    };
  });
}

function areaOutlook(plan: NeedPlan, part: NeedPart, a: number, input: OutlookInput): AreaOutlook {
  const area = input.areas[a];
  const { hours, size } = part;
  const staffed = input.hours.map((_, h) => plan.areas[a].beds[plan.hourTo[h] - 1]);
  const common = byHour(part, a, staffed, input.planningRisk);
  // An area of few bed spaces speaks of any time within the hour, as it is printed.
  const small = area.spaces <= smallAreaSpaces;
  const printed = small ? common.shortfallWithin : common.shortfall;
  const chanceWith = (h: number, added: number): Chance =>
    small
      ? chanceAbove(slice(part.within, a * hours + h, highestExcess + 1), added)
      : chanceAbove(slice(part.need, a * hours + h, size), staffed[h] + added);
  const bedsToAdd = input.hours.map((_, h) => addedBeds((added) => chanceWith(h, added).chance, area, size));
  const bedsThatDoNotExist = bedsToAdd.map((added, h) =>
    added === 0 ? 0 : Math.min(added, Math.max(0, staffed[h] + added - area.spaces)),
  );
  const first = printed.findIndex((chance) => chance.chance > area.alertLimit);
  const peak = slice(part.peak, a, size);
  const replications = part.toReplication - part.fromReplication;
  const short = part.bedHoursShort.slice(a * replications, (a + 1) * replications).sort();
  const span = first < 0 ? null : shiftSpan(input, first, small);
  return {
    areaId: area.areaId,
    counted: area.census !== null,
    ...common,
    shifts: shiftsOf(part, a, input),
    firstHourPastLimit: first < 0 ? null : first,
    bedsToAdd,
    bedsThatDoNotExist,
    shortfallWithEverySpace: input.hours.map((_, h) => chanceWith(h, Math.max(0, area.spaces - staffed[h]))),
    smallestChange: span === null ? null : smallestChange(input, span, bedsToAdd, bedsThatDoNotExist),
    boardingOut: span === null ? null : boardingOut(part, a, input, span),
    admittedLeaving: flows(part.admittedLeaving, a, part),
    arrivalsToAdmit: flows(part.arrivalsToAdmit, a, part),
    bedHoursShort: {
      mean: short.reduce((sum, value) => sum + value, 0) / replications,
      p90: short[Math.min(replications - 1, Math.ceil(0.9 * replications) - 1)],
    },
    peak: { p50: histogramQuantile(peak, 0.5), p90: histogramQuantile(peak, 0.9), p95: histogramQuantile(peak, 0.95) },
  };
}

interface Span {
  first: number;
  last: number;
  /** By when a remedy must stand: the first full hour, or the start of the hour that ends with it where any time within counts. */
  from: number;
}

/** The hours from the first past the limit to the end of the last shift that holds it. */
function shiftSpan(input: OutlookInput, first: number, small: boolean): Span {
  const at = input.hours[first];
  const end = input.shifts.reduce(
    (latest, shift) => (shift.from <= at && at < shift.to ? Math.max(latest, shift.to) : latest),
    at + 1,
  );
  let last = first;
  while (last + 1 < input.hours.length && input.hours[last + 1] < end) last += 1;
  const hourBefore = first > 0 ? input.hours[first - 1] : input.issuedAt;
  return { first, last, from: small ? hourBefore : at };
}

function smallestChange(
  input: OutlookInput,
  { first, last, from }: Span,
  bedsToAdd: readonly number[],
  missing: readonly number[],
): AreaOutlook['smallestChange'] {
  const past: number[] = [];
  for (let h = first; h <= last; h += 1) if (bedsToAdd[h] > 0) past.push(h);
  if (past.length === 0) return null;
  return {
    beds: Math.max(...past.map((h) => bedsToAdd[h])),
    from,
    to: input.hours[past[past.length - 1]],
    doNotExist: Math.max(...past.map((h) => missing[h])),
  };
}

function boardingOut(
  part: NeedPart,
  a: number,
  input: OutlookInput,
  { first, last, from }: Span,
): AreaOutlook['boardingOut'] {
  const boarders = input.areas[a].census?.boarding ?? 0;
  const { hours, boarderSize } = part;
  for (let patients = 1; patients <= boarders; patients += 1) {
    let enough = true;
    for (let h = first; h <= last && enough; h += 1) {
      const needed = slice(part.boardersNeeded, a * hours + h, boarderSize);
      // Entry k counts replications that k boarders end: those needing more than `patients` stay short.
      const short = needed.reduce((sum, count, k) => (k > patients ? sum + count : sum), 0);
      enough = short <= input.areas[a].alertLimit * input.replications;
    }
    if (enough) return { patients, by: from };
  }
  return null;
}

/**
 * An outlook's result from the parts of its replications, whichever way they were split. Chances carry their Monte
 * Carlo standard error; percentiles are the smallest count with at least that share of replications at or below it.
 * @throws RangeError when parts overlap or leave a hole, or do not hold the input's replications.
 */
export function finishOutlook(
  input: OutlookInput,
  prepared: { plan: NeedPlan; lengthOfStay: OutlookResult['lengthOfStay'] },
  parts: readonly NeedPart[],
  arrivalsSoFar: OutlookResult['arrivalsSoFar'],
): OutlookResult {
  const part = mergeNeedParts(parts);
  if (part.fromReplication !== 0 || part.toReplication !== input.replications) {
    throw new RangeError(`parts hold replications ${part.fromReplication}..${part.toReplication}`);
  }
  const { plan } = prepared;
  const areas = input.areas.map((_, a) => areaOutlook(plan, part, a, input));
  const staffed = input.hours.map((_, h) => areas.reduce((sum, area) => sum + area.staffed[h], 0));
  const count = (n: number): Chance => chanceOf(n, input.replications);
  return {
    engineVersion,
    hours: [...input.hours],
    areas,
    pooled: byHour(part, null, staffed, input.planningRisk),
    someAreaShort: Array.from(part.someShort, count),
    someAreaShortByShift: input.shifts.map((_, s) => count(part.shiftShort[part.areas * part.shifts + s])),
    arrivalsSoFar,
    lengthOfStay: prepared.lengthOfStay,
    replications: input.replications,
  };
}
