import { isoWeekday } from '../../shared/domain/zoned-time.ts';
import type { AreaModel, ArrivalModel, FactorStructure } from '../../shared/forecasting/arrival-model.ts';

/**
 * An arrival model of two areas whose every law is known: no error of profile, level or effects, only the factor that a
 * structure says. Rates are those of tests/reference/make-span-sums.py; training ends at `endLocalHour`.
 */
export function buildExactArrivals(
  structure: FactorStructure,
  factorVariance: number,
  factorCorrelation: number,
  endLocalHour: number,
): ArrivalModel {
  const rates = [
    (day: number, hour: number) => (2 + (hour >= 10 && hour < 22 ? 6 : 0)) * (day === 0 || day === 5 ? 1.2 : 1),
    (_: number, hour: number) => 1 + (hour % 3),
  ];
  const nothing = { mean: [0, 0, 0], covariance: new Array<number>(9).fill(0) };
  const area = (rate: (day: number, hour: number) => number): AreaModel => ({
    profile: {
      ratePerHour: Array.from({ length: 168 }, (_, hour) => rate(Math.floor(hour / 24), hour % 24)),
      logSd: new Array<number>(168).fill(0),
      smoothWeight: new Array<number>(168).fill(0),
      basisFactor: [0],
      basisSize: 1,
      shrinkage: 1,
    },
    own: nothing,
    ownEffects: [],
    ownLevelVariancePerDay: 0,
    factorVariance: 0,
    factorCorrelation: 0,
    arrivals: 1000,
  });
  const siteCovariance = new Array<number>(9).fill(0);
  // The factor's own law at the end of training is its stationary one.
  siteCovariance[4] = factorVariance;
  return {
    version: 1,
    areas: rates.map(area),
    endLocalHour,
    firstLocalHour: endLocalHour - 52 * 168,
    weeksOfHistory: 52,
    site: { mean: [0, 0, 0], covariance: siteCovariance },
    effects: [],
    levelVariancePerDay: 0,
    spellVariance: 0,
    spellCorrelationPerDay: 0,
    factorVariance,
    factorLogSdError: 0,
    factorCorrelation,
    structure,
    holidayWeekday: 0,
    calendar: [],
    settings: {
      profileHalfLifeWeeks: null,
      structure,
      levelVariancePerDay: 0,
      spellVariance: 0,
      factorVariance,
      factorLogSdError: 0,
      factorCorrelation,
      seasonSd: 0,
      holidayWeekday: 0,
    },
    structureScores: [],
    coarse: false,
    cautions: [],
  };
}

/** The first Monday 00:00 at or after a local hour, in local hours. */
export function nextMonday(localHour: number): number {
  let at = Math.ceil(localHour / 24) * 24;
  while (isoWeekday(at * 3600) !== 1) at += 24;
  return at;
}
