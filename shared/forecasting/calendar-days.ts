import { instantOfLocal } from '../domain/shift-times.ts';
import { localDate, localSecondsOf, type Zone } from '../domain/zoned-time.ts';
import type { AreaModel, ArrivalModel, EffectPrior, LevelState } from './arrival-model.ts';
import { effectPrior, type CalendarIndex } from './calendar-effect.ts';
import { firstEffect } from './level-filter.ts';
import { forecastCalendar } from './log-level-belief.ts';
import type { CalendarDay } from './visit-table.ts';
import type { WeekCalendarDay } from './week-outlook-types.ts';

/** Standard deviations to either side that hold 90 % of a normal belief. */
const ninety = 1.6448536269514722;

/** Mean and variance of the sum of some effects, by their posterior where they were fitted and by their prior elsewhere. */
function sumOf(
  keys: readonly string[],
  state: LevelState,
  effects: readonly EffectPrior[],
  index: CalendarIndex,
  seasonSd: number,
): { mean: number; variance: number } {
  const size = state.mean.length;
  const known = keys.flatMap((key) => {
    const at = effects.findIndex((effect) => effect.key === key);
    return at < 0 ? [] : [firstEffect + at];
  });
  let mean = known.reduce((sum, at) => sum + state.mean[at], 0);
  let variance = 0;
  for (const i of known) for (const j of known) variance += state.covariance[i * size + j];
  for (const key of keys) {
    if (effects.some((effect) => effect.key === key)) continue;
    const prior = effectPrior(key, index, seasonSd);
    mean += prior.mean;
    variance += prior.sd ** 2;
  }
  return { mean, variance };
}

/** Arrivals of an ordinary day of a weekday, and of the same day with the hourly shape that holidays take. */
function dayTotal(area: AreaModel, weekday: number): number {
  return area.profile.ratePerHour.slice(weekday * 24, weekday * 24 + 24).reduce((sum, rate) => sum + rate, 0);
}

/**
 * The unusual days of [fromUtc, toUtc) with their effect on the day's arrivals: the shape a holiday takes, what holidays
 * have in common and what days of this name have of their own. The range is of the effect alone; what days vary by
 * anyway comes on top. Cost: effects² a day.
 */
export function calendarDays(
  model: ArrivalModel,
  calendar: readonly CalendarDay[],
  zone: Zone,
  fromUtc: number,
  toUtc: number,
): WeekCalendarDay[] {
  const index = forecastCalendar(model, calendar);
  const seasonSd = model.settings.seasonSd;
  const firstDate = localDate(model.firstLocalHour * 3600);
  const endDate = localDate(model.endLocalHour * 3600);
  const past = model.calendar.filter(({ date }) => date >= firstDate && date < endDate);
  const found: WeekCalendarDay[] = [];
  for (const { date, name, kind, statedEffect } of calendar) {
    const local = localSecondsOf(date);
    const from = instantOfLocal(zone, local);
    const to = instantOfLocal(zone, local + 86_400);
    if (to <= fromUtc || from >= toUtc) continue;
    if (found.some((day) => day.date === date && day.name === name)) continue;
    const holiday = kind === 'public holiday';
    const keys = holiday ? ['holiday', `own:${name}`] : [`own:${name}`];
    const site = sumOf(keys, model.site, model.effects, index, seasonSd);
    const weekday = (((local / 86_400 + 3) % 7) + 7) % 7;
    const shape = holiday && model.holidayWeekday > 0 ? model.holidayWeekday - 1 : weekday;
    let ordinary = 0;
    let unusual = 0;
    for (const area of model.areas) {
      const own = keys.filter((key) => area.ownEffects.some((effect) => effect.key === key));
      const shift = sumOf(own, area.own, area.ownEffects, index, seasonSd);
      ordinary += dayTotal(area, weekday);
      unusual += dayTotal(area, shape) * Math.exp(shift.mean);
    }
    const middle = (unusual / ordinary) * Math.exp(site.mean);
    const spread = Math.exp(ninety * Math.sqrt(Math.max(0, site.variance)));
    const pastDays = past.filter((day) => day.name === name).length;
    const seen = pastDays > 0 || (holiday && past.some((day) => day.kind === 'public holiday'));
    found.push({
      date,
      name,
      kind,
      from,
      to,
      effect: middle,
      low: middle / spread,
      high: middle * spread,
      basis: seen ? 'learned' : statedEffect ? 'stated' : 'not known',
      pastDays,
    });
  }
  return found.sort((a, b) => a.from - b.from);
}
