import { makeZone } from '../../shared/domain/zoned-time.ts';
import type { ArrivalModel } from '../../shared/forecasting/arrival-model.ts';
import { countHourly } from '../../shared/forecasting/count-hourly.ts';
import { fitArrivals } from '../../shared/forecasting/fit-arrivals.ts';
import { fitStays } from '../../shared/forecasting/fit-stays.ts';
import type { OutlookModel } from '../../shared/forecasting/prepare-need.ts';
import { blockHazards, expectedShares } from '../../shared/forecasting/stay-model.ts';
import type { StayModel } from '../../shared/forecasting/stay-model.ts';
import { weeklyRates } from '../../shared/forecasting/weekly-rates.ts';
import { readReference, readVisitText, unpackReference } from './read-reference-log.ts';

/** What truth.json states of the process that the log was drawn from. */
export interface LogTruth {
  timeZone: string;
  from: number;
  to: number;
  takenAt: number;
  outage: [from: number, to: number];
  areas: string[];
  dayFactorVariance: number;
  /** By area and hour of the week. */
  ratePerHour: number[][];
  /** By area, block of four hours and disposition. */
  shares: number[][][];
  /** By area, stream and block of two hours, weekdays first. */
  hazardPerHour: Record<'home' | 'boarding' | 'transferred' | 'left', number[]>[];
}

/** The parameters of a fitted model at their means: all that need stands on once nothing but chance is left. */
export interface KnownParameters {
  /** By area and hour of the week, arrivals an hour. */
  ratePerHour: number[][];
  /** By stream (area-major, boarding last) and block of two hours, weekdays first. */
  hazardPerHour: number[][];
  /** By area, block of four hours and disposition. */
  shares: number[][][];
  shareBeforeDecision: (number | null)[];
}

/** Reads and fits the reference log as the product does: reader, counts, arrivals, stays. */
export function fitReferenceLog() {
  const truth = readReference('truth.json') as LogTruth;
  const { outcome, table } = readVisitText(unpackReference('visits.csv.gz'), truth.areas, truth.takenAt);
  const zone = makeZone(truth.timeZone);
  const { from, to, takenAt } = truth;
  const gaps = [{ area: null, from: truth.outage[0], to: truth.outage[1] }];
  const areas = truth.areas.length;
  const counts = countHourly(table, areas, zone, from, to, gaps);
  const arrival = fitArrivals({ counts, calendar: [] });
  const stay = fitStays({
    visits: table,
    areas,
    zone,
    window: { from, to },
    facts: { selectedBy: 'arrived', takenAt, missingDeparture: 'still present' },
    gaps,
  });
  return { truth, outcome, table, zone, gaps, counts, arrival, stay };
}

/** A fit's parameters at their means. */
export function parametersOf(arrival: ArrivalModel, stay: StayModel): KnownParameters {
  return {
    ratePerHour: arrival.areas.map((_, area) => weeklyRates(arrival, area).ratePerHour),
    hazardPerHour: stay.streams.map((stream) => Array.from(blockHazards(stream))),
    shares: stay.shares.map(expectedShares),
    shareBeforeDecision: [...stay.shareBeforeDecision],
  };
}

const certain = 1e12;

/** A fitted model with its parameters replaced by known ones and everything else that is drawn switched off. */
export function modelWithParameters(
  fit: { arrival: ArrivalModel; stay: StayModel },
  known: KnownParameters,
): OutlookModel {
  const zeros = (values: readonly number[]) => values.map(() => 0);
  const arrival: ArrivalModel = {
    ...fit.arrival,
    structure: 'none',
    site: { mean: zeros(fit.arrival.site.mean), covariance: zeros(fit.arrival.site.covariance) },
    levelVariancePerDay: 0,
    spellVariance: 0,
    factorVariance: 0,
    factorLogSdError: 0,
    areas: fit.arrival.areas.map((area, a) => ({
      ...area,
      profile: {
        ...area.profile,
        ratePerHour: known.ratePerHour[a],
        // As good as none: an error of exactly 0 is no profile that a fit can give.
        logSd: area.profile.logSd.map(() => 1e-9),
        smoothWeight: zeros(area.profile.smoothWeight),
        basisFactor: zeros(area.profile.basisFactor),
      },
      own: { mean: zeros(area.own.mean), covariance: zeros(area.own.covariance) },
      ownLevelVariancePerDay: 0,
      factorVariance: 0,
    })),
  };
  const still = { variance: 0, varianceSe: 0, correlation: 0, correlationSe: 0, levelSe: 0, days: 0 };
  const stay: StayModel = {
    ...fit.stay,
    streams: fit.stay.streams.map((stream, s) => ({
      ...stream,
      hazard: { shape: certain, rate: certain },
      // With μ = 1 the block's factor is its hazard, known as well as so many departures would tell it.
      blockStrength: known.hazardPerHour[s].map(() => 1e-9),
      blockPrior: known.hazardPerHour[s].map(() => 1),
      blockDepartures: known.hazardPerHour[s].map((hazard) => hazard * certain),
      blockHoursAtRisk: known.hazardPerHour[s].map(() => certain),
      shape: null,
    })),
    shares: fit.stay.shares.map(({ area }, a) => ({
      area,
      alpha: known.shares[a].map((block) => block.map((share) => share * certain)),
    })),
    shareBeforeDecision: known.shareBeforeDecision,
    // The reference follows whole admitted stays.
    toDecision: undefined,
    outflow: { others: still, admitted: still },
  };
  return { arrival, stay, calendar: [] };
}
