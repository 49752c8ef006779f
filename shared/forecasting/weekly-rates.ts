import { normalQuantile } from '../stochastic/normal.ts';
import { hoursOfWeek } from '../domain/hour-of-week.ts';
import type { ArrivalModel } from './arrival-model.ts';
import { profileError } from './profile-error.ts';

/** Arrivals an hour for the 168 hours of the week, Monday 00:00 first, each with its own posterior interval. */
export interface WeeklyRates {
  ratePerHour: number[];
  low: number[];
  high: number[];
}

/**
 * An area's rates at the level of the training's end, season and calendar apart, with the posterior interval of each
 * (log-normal: error of the profile, the site's level and the area's own). Never a Garwood bar: these rates are shrunk.
 */
export function weeklyRates(model: ArrivalModel, area: number, level = 0.95): WeeklyRates {
  if (!(area >= 0 && area < model.areas.length)) throw new RangeError(`model has no area ${area}`);
  if (!(level > 0 && level < 1)) throw new RangeError(`level must lie between 0 and 1, got ${level}`);
  const { profile, own } = model.areas[area];
  const hours = [...Array(hoursOfWeek).keys()];
  const error = profileError(profile, hours, model.coarse);
  const levelVariance = model.site.covariance[0] + own.covariance[0];
  const z = normalQuantile((1 + level) / 2);
  const factor = Math.exp(model.site.mean[0] + own.mean[0] + levelVariance / 2);
  const ratePerHour = profile.ratePerHour.map((rate) => rate * factor);
  const width = hours.map((hour) => Math.exp(z * Math.sqrt(error.variance[hour] + levelVariance)));
  return {
    ratePerHour,
    low: ratePerHour.map((rate, hour) => rate / width[hour]),
    high: ratePerHour.map((rate, hour) => rate * width[hour]),
  };
}
