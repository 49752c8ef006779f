import { hoursOfWeek } from '../domain/hour-of-week.ts';
import { withOwnEnds } from '../domain/in-charge-spans.ts';
import { localDate, makeZone, type Zone } from '../domain/zoned-time.ts';
import { calendarDays } from './calendar-days.ts';
import { finishWeek } from './finish-week.ts';
import { prepareNeed } from './prepare-need.ts';
import type { OutlookModel, PreparedNeed } from './prepare-need.ts';
import { expectedRates } from './rate-draws.ts';
import { gridOfLocalHours } from './rate-grid.ts';
import { makeWeekPart, makeWeekRecorder, mergeWeekParts, type WeekDays, type WeekPart } from './record-week.ts';
import { makeReplication } from './simulate-need.ts';
import { weekArrivals } from './week-arrivals.ts';
import { weekWaits } from './week-waits.ts';
import type { WeekOutlookInput, WeekOutlookResult, WeekSpan } from './week-outlook-types.ts';
import { withCalendar } from './with-calendar.ts';

/** What the parts of a week outlook and its end stand on; made once a thread. */
export interface PreparedWeek extends PreparedNeed {
  input: WeekOutlookInput;
  /** The model with the calendar of the input. */
  model: OutlookModel;
  zone: Zone;
  days: WeekSpan[];
  weekDays: WeekDays;
}

/** The local days of an outlook, the first being what is left of today, and the day of each hour. */
function daysOf(input: WeekOutlookInput, zone: Zone): { days: WeekSpan[]; dayOfHour: Int16Array } {
  const days: WeekSpan[] = [];
  const dayOfHour = Int16Array.from(input.hours, (at, h) => {
    if (at > input.daysUntil) return -1;
    const from = h === 0 ? input.issuedAt : input.hours[h - 1];
    const name = localDate(zone.toLocal(from));
    const last = days.at(-1);
    if (last?.name === name) last.to = at;
    else days.push({ name, from, to: at });
    return days.length - 1;
  });
  return { days, dayOfHour };
}

/** Makes ready for the replications. @throws RangeError naming a bad input. Cost: tens of ms. */
export function prepareWeek(model: OutlookModel, input: WeekOutlookInput): PreparedWeek {
  if (model.arrival.coarse) {
    throw new RangeError('under eight weeks of history arrivals are forecast for 24 hours at most');
  }
  const zone = makeZone(input.timeZone);
  // A shift's need and beds are those of its own half hours: at handover the incoming shift's beds are staffed.
  const prepared = prepareNeed(model, { ...input, shifts: withOwnEnds(input.shifts, input.issuedAt) });
  const { days, dayOfHour } = daysOf(input, zone);
  // Admissions are arrivals of some days: three times an even share of all patients is out of reach.
  const present = prepared.plan.areas.reduce((sum, area) => sum + area.highest, 0);
  const arrivals = prepared.flows.reduce((sum, flow) => sum + flow.arrivals, 0);
  const highest = Math.min(4000, Math.ceil((3 * arrivals) / Math.max(1, days.length) + present));
  const weekDays = { count: days.length, dayOfHour, highest };
  return { ...prepared, input, model: withCalendar(model, input), zone, days, weekDays };
}

/** One thread's share: replications [from, to). The parts of any split add up to the same result. */
export function simulateWeekPart({ plan, weekDays }: PreparedWeek, from: number, to: number): WeekPart {
  if (!(Number.isInteger(from) && Number.isInteger(to) && from >= 0 && to > from)) {
    throw new RangeError(`replications must be whole and ascending, got ${from}..${to}`);
  }
  const part = makeWeekPart(plan, weekDays, from, to);
  const replicate = makeReplication(plan, {});
  const record = makeWeekRecorder(plan, weekDays, part);
  for (let replication = from; replication < to; replication += 1) record(replicate(replication));
  return part;
}

/** Arrivals an hour in an ordinary week of the coming days' season and level, Monday 00:00 first, by area. */
function ordinaryWeek({ model, input, zone }: PreparedWeek): number[][] {
  const midnight = Math.floor(zone.toLocal(input.issuedAt) / 86_400) * 24 + 24;
  const monday = midnight + ((hoursOfWeek - ((midnight + 72) % hoursOfWeek)) % hoursOfWeek);
  const grid = gridOfLocalHours(monday, new Float64Array(hoursOfWeek).fill(1));
  return expectedRates({ ...model.arrival, calendar: [] }, grid, []).map((rates) =>
    Array.from(rates, (rate) => Math.round(rate * 1000) / 1000),
  );
}

/** The result from its parts: need, chances, beds to add, admissions, arrivals, unusual days. */
export function weekFromParts(prepared: PreparedWeek, parts: readonly WeekPart[]): WeekOutlookResult {
  const { input, model, zone, days, live } = prepared;
  const need = finishWeek(prepared, mergeWeekParts(parts));
  const last = input.hours[input.hours.length - 1];
  return {
    ...need,
    arrivals: weekArrivals(model, input, days, live, zone),
    calendar: calendarDays(model.arrival, model.calendar, zone, input.issuedAt, last),
    ordinaryWeek: ordinaryWeek(prepared),
    waits: weekWaits(model, input),
  };
}

/**
 * The days ahead on one thread, simulated jointly from the census (or, for an area without one, from the model's own
 * distribution). The same input and engine version give the same digits.
 * @throws RangeError naming a bad input. Cost: about 0.3 ms a replication of 5 areas × 15 days, and 1 s for arrivals.
 */
export function issueWeekOutlook(model: OutlookModel, input: WeekOutlookInput): WeekOutlookResult {
  const prepared = prepareWeek(model, input);
  return weekFromParts(prepared, [simulateWeekPart(prepared, 0, input.replications)]);
}
