import type { Zone } from '../domain/zoned-time.ts';
import { makeZone } from '../domain/zoned-time.ts';
import { makeStream } from '../stochastic/random.ts';
import type { ArrivalModel, LiveArrivals } from './arrival-model.ts';
import { mixtureForecast, type CountForecast } from './count-forecast.ts';
import { histogramForecast } from './histogram-forecast.ts';
import { mergeNeedParts, type NeedPart } from './need-part.ts';
import type { OutlookInput, OutlookResult } from './outlook-types.ts';
import type { PreparedOutlook } from './issue-outlook.ts';
import type { OutlookModel } from './prepare-need.ts';
import { printedShortfall } from './printed-shortfall.ts';
import { makeRateDraw } from './rate-draws.ts';
import { makeRateGrid } from './rate-grid.ts';
import type { CalendarDay } from './visit-table.ts';
import { withCalendar } from './with-calendar.ts';

/** Leads at which an outlook of tonight is scored, hours. */
export const outlookLeads = [1, 4, 8, 12, 24] as const;

/** A distribution as it is kept: replications by count from `first` on, or the means of an equal mixture of Poisson counts. */
export type KeptLaw = { first: number; counts: number[] } | { means: number[] };

/**
 * One thing that an outlook said and that can be scored once it is known: need at a lead, the highest need of a shift, the
 * arrivals of a day or a shift. `areaId` null is the whole department.
 */
export interface IssuedLaw {
  measure: 'need' | 'peak' | 'arrivals' | 'shift arrivals';
  areaId: string | null;
  /** Hours ahead for need, else 0; of a week outlook the group that it falls in, see record-lead. */
  leadHours: number;
  /** The shift's name for a shift's figure, else null. */
  shift: string | null;
  /** UTC seconds; for need both are the full hour. */
  from: number;
  to: number;
  /** Null where only a chance was given (the department's shifts). */
  law: KeptLaw | null;
  /** The chance of shortfall as it was printed; null for arrivals. */
  chance: number | null;
}

/** Day totals are kept when they begin no later than this after the outlook. */
const daySoonHours = 12;
const arrivalDraws = 600;
const arrivalNodes = 50;

/** A kept distribution as a forecast that can be scored. */
export function forecastOfLaw(law: KeptLaw): CountForecast {
  if ('means' in law) return mixtureForecast(Float64Array.from(law.means));
  const counts = new Int32Array(law.first + law.counts.length);
  counts.set(law.counts, law.first);
  return histogramForecast(counts);
}

/**
 * The distributions behind an outlook that will be scored: need of each area and of the department at the fixed leads, the
 * highest need of the next shift of each name, and the arrivals of the next local day if it begins within half a day.
 * A lead is the full hour nearest to it. Summaries do not suffice: log score, exact mass and PIT need the whole law.
 * Cost: a few ms.
 */
export function outlookLaws(
  prepared: PreparedOutlook,
  parts: readonly NeedPart[],
  result: OutlookResult,
  model: OutlookModel,
): IssuedLaw[] {
  const { input } = prepared;
  const part = mergeNeedParts(parts);
  const { arrival, calendar } = withCalendar(model, input);
  return [
    ...leadLaws(input, part, result),
    ...shiftLaws(input, part, result),
    ...arrivalLaws(input, arrival, calendar, prepared.live),
  ];
}

/** A histogram of replications without its empty ends. */
export function keepHistogram(values: Int32Array): KeptLaw {
  let first = 0;
  let last = values.length - 1;
  while (first < last && values[first] === 0) first += 1;
  while (last > first && values[last] === 0) last -= 1;
  return { first, counts: Array.from(values.subarray(first, last + 1)) };
}

function leadLaws(input: OutlookInput, part: NeedPart, result: OutlookResult): IssuedLaw[] {
  const laws: IssuedLaw[] = [];
  for (const leadHours of outlookLeads) {
    const h = input.hours.findIndex((at) => Math.abs(at - input.issuedAt - leadHours * 3600) <= 1800);
    if (h < 0) continue;
    const at = input.hours[h];
    const common = { measure: 'need' as const, leadHours, shift: null, from: at, to: at };
    input.areas.forEach((area, a) => {
      // An area without a count was shown as "not counted"; there is nothing to hold it to.
      if (area.census === null) return;
      const place = (a * part.hours + h) * part.size;
      laws.push({
        ...common,
        areaId: area.areaId,
        law: keepHistogram(part.need.subarray(place, place + part.size)),
        chance: printedShortfall(result.areas[a], area.spaces)[h].chance,
      });
    });
    if (input.areas.some((area) => area.census === null)) continue;
    const pooled = part.pooledNeed.subarray(h * part.pooledSize, (h + 1) * part.pooledSize);
    laws.push({ ...common, areaId: null, law: keepHistogram(pooled), chance: result.someAreaShort[h].chance });
  }
  return laws;
}

function shiftLaws(input: OutlookInput, part: NeedPart, result: OutlookResult): IssuedLaw[] {
  const laws: IssuedLaw[] = [];
  const last = input.hours[input.hours.length - 1];
  const seen = new Set<string>();
  input.shifts.forEach(({ name, from, to }, s) => {
    if (from < input.issuedAt || to > last || seen.has(name)) return;
    seen.add(name);
    const common = { measure: 'peak' as const, leadHours: 0, shift: name, from, to };
    input.areas.forEach((area, a) => {
      if (area.census === null) return;
      const place = (a * part.shifts + s) * part.size;
      laws.push({
        ...common,
        areaId: area.areaId,
        law: keepHistogram(part.shiftPeak.subarray(place, place + part.size)),
        chance: result.areas[a].shifts[s].someTime.chance,
      });
    });
    if (input.areas.some((area) => area.census === null)) return;
    laws.push({ ...common, areaId: null, law: null, chance: result.someAreaShortByShift[s].chance });
  });
  return laws;
}

/** The first local midnight after an instant, and the one after it. */
export function nextLocalDay(zone: Zone, at: number): { from: number; to: number } {
  const day = Math.floor(zone.toLocal(at) / 86_400) + 1;
  const midnight = (local: number): number => zone.fromLocal(local)[0] ?? zone.fromLocal(local + 3600)[0];
  return { from: midnight(day * 86_400), to: midnight((day + 1) * 86_400) };
}

function arrivalLaws(
  input: OutlookInput,
  model: ArrivalModel,
  calendar: readonly CalendarDay[],
  live: LiveArrivals | null,
): IssuedLaw[] {
  const zone = makeZone(input.timeZone);
  const { from, to } = nextLocalDay(zone, input.issuedAt);
  if (from - input.issuedAt > daySoonHours * 3600 || model.coarse) return [];
  const grid = makeRateGrid(zone, from, to);
  const draw = makeRateDraw(model, grid, calendar, live ?? undefined);
  const rates = model.areas.map(() => new Float64Array(grid.hours.length));
  const sums = [...model.areas, null].map(() => new Float64Array(arrivalDraws));
  const total = sums[model.areas.length];
  for (let r = 0; r < arrivalDraws; r += 1) {
    draw(makeStream(input.seed, 13, r), rates);
    rates.forEach((rate, a) => {
      let sum = 0;
      for (let i = 0; i < rate.length; i += 1) sum += rate[i] * grid.hours[i];
      sums[a][r] = sum;
      total[r] += sum;
    });
  }
  const common = { measure: 'arrivals' as const, leadHours: 0, shift: null, from, to, chance: null };
  return sums.map((means, a) => ({
    ...common,
    areaId: a < model.areas.length ? input.areas[a].areaId : null,
    law: { means: gather(means) },
  }));
}

/** Equally likely groups of the sorted draws, each by its mean; to a thousandth. */
export function gather(draws: Float64Array): number[] {
  draws.sort();
  return Array.from({ length: arrivalNodes }, (_, g) => {
    const from = Math.round((g * draws.length) / arrivalNodes);
    const to = Math.round(((g + 1) * draws.length) / arrivalNodes);
    let sum = 0;
    for (let i = from; i < to; i += 1) sum += draws[i];
    return Math.round((1000 * sum) / (to - from)) / 1000;
  });
}
