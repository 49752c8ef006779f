import { dispositions } from '../domain/disposition.ts';

/** The length-of-stay streams of one area: the four dispositions, then boarding (admission decision to departure). */
export const streamsPerArea = dispositions.length + 1;
/** Offset of the boarding stream within an area's streams. */
export const boardingStream = dispositions.length;
/** Offset of the admitted stream within an area's streams. */
export const admittedStream = 1;
/** Code of the stage from arrival to the admission decision; where it is fitted it takes the admitted stream's place (`stagedStays`). */
export const decisionStage = dispositions.length + 1;

/** A gamma posterior: mean = shape / rate. */
export interface GammaPosterior {
  shape: number;
  rate: number;
}

/**
 * How long the stays of one stream are: departures come at hazard μ · g(block), piecewise constant.
 * `hazard` is the posterior of μ (per hour); g of block b given μ has posterior Gamma(strength[b] + departures[b],
 * strength[b] / prior[b] + μ · hoursAtRisk[b]), so a block with little data stays near its prior: the pattern of the
 * site's streams of the same disposition, itself held to 1.
 */
export interface StayStream {
  area: number;
  /** Code of shared/domain/disposition, `boardingStream` or `decisionStage`. */
  stream: number;
  /** Visits that the fit used. */
  visits: number;
  /** Of those, how many were censored at the cap. */
  censored: number;
  departures: number;
  hoursAtRisk: number;
  /** Maximum likelihood: departures / hours at risk, per hour; null without a departure. */
  departuresPerHour: number | null;
  /** 95 % limits of it by the χ² relation; null without time at risk. */
  limits: [low: number, high: number] | null;
  hazard: GammaPosterior;
  /** Strength with which the block factors are held to their prior, in departures; chosen by marginal likelihood, and never more than the prior itself rests on. */
  blockStrength: number[];
  blockPrior: number[];
  /** By block of the day, ordinary weekdays first, then weekends and holidays. */
  blockDepartures: number[];
  blockHoursAtRisk: number[];
  /** The stays' own shape, if enough departures were seen; null means exponential. */
  shape: StayShape | null;
}

/**
 * Inverse cumulative hazard of the stays in operational time (∫ μ g f dt, mean about 1): entry i is the stay at
 * cumulative hazard i · step; beyond the table it goes on with slope `tail`. The exponential law is the identity.
 */
export interface StayShape {
  step: number;
  stays: number[];
  tail: number;
}

/** A factor on the departure hazard that varies by day: lognormal with mean 1, AR(1) in its logarithm. */
export interface OutflowFactor {
  /** Variance of the factor. */
  variance: number;
  varianceSe: number;
  /** Correlation of one day's log factor with the next day's. */
  correlation: number;
  correlationSe: number;
  /** Standard error of the factor's mean over the training window; it is an error of every hazard of the group at once. */
  levelSe: number;
  /** Days it was estimated from. */
  days: number;
}

/** The two groups of streams with an outflow factor each. */
export type OutflowGroup = 'others' | 'admitted';

/** Where disposition shares come from: Dirichlet parameters by block of the day of arrival, 4 dispositions each. */
export interface DispositionShares {
  area: number;
  alpha: number[][];
}

/** What bed-space times say of one area; only where they are loaded. */
export interface BedSpaceStays {
  area: number;
  /** Visits with a bed-space time. */
  visits: number;
  meanWaitHours: number;
  /** By disposition: departures from a bed space and hours spent in one. */
  departures: number[];
  hoursInBedSpace: number[];
  /** Those who left before treatment, and the hours that everyone spent waiting: patience as a competing risk. */
  leftBeforeTreatment: number;
  hoursWaiting: number;
}

/** How often times fall on the same minute, as a share of all, beside what evenly spread minutes would give. */
export interface Heaping {
  arrivalsOnTheHour: number;
  departuresOnTheHour: number;
  expectedOnTheHour: number;
  departuresAt2359: number;
  expectedAt2359: number;
  /** The minutes of the day with the most departures beyond their neighbours, strongest first, at most five. */
  strongest: { minuteOfDay: number; share: number; neighbours: number }[];
}

/** Length of stay as fitted; plain data. Draws of every unknown come from makeStayDraw. */
export interface StayModel {
  areas: number;
  /** Stays are censored here, hours; less than asked for when the window is short. */
  capHours: number;
  blockHours: number;
  shareBlockHours: number;
  /** Local hour of day at which the outflow factor's day begins: 0 or 4, whichever explained the past better. */
  outflowDayStartsAt: number;
  /** Local dates that count as weekend. */
  holidays: string[];
  /** Arrivals used: from .. to, UTC seconds. */
  usedFrom: number;
  usedTo: number;
  /** Area-major, `streamsPerArea` each. */
  streams: StayStream[];
  /** Of the time that admitted patients stay, the share before the admission decision; null where decisions are not loaded. */
  shareBeforeDecision: (number | null)[];
  /** The admitted's time to the decision as a stage of its own, by area; null where too few decisions are loaded. Absent in models fitted before it was. */
  toDecision?: (StayStream | null)[];
  /** Whose outflow factor the time to the decision goes with, whichever explains the decisions better. */
  decisionFollows?: OutflowGroup;
  shares: DispositionShares[];
  outflow: { others: OutflowFactor; admitted: OutflowFactor };
  bedSpace: (BedSpaceStays | null)[];
  heaping: Heaping;
  /** Rows that could not be used, by reason. */
  leftOut: {
    endsBeforeStart: number;
    over30Days: number;
    outsideWindow: number;
    inGap: number;
    departureUnknown: number;
    dispositionUnknown: number;
  };
  /** Share of used stays over the cap. */
  overCapShare: number;
  cautions: string[];
}

/** Posterior means of a stream's hazard by block, per hour. */
export function blockHazards(stream: StayStream): Float64Array {
  const mean = stream.hazard.shape / stream.hazard.rate;
  return Float64Array.from(stream.blockDepartures, (departures, block) => {
    const expected = mean * stream.blockHoursAtRisk[block];
    return (
      (mean * (stream.blockStrength[block] + departures)) /
      (stream.blockStrength[block] / stream.blockPrior[block] + expected)
    );
  });
}

/** Expected disposition shares of an area by block of the day of arrival. */
export function expectedShares(shares: DispositionShares): number[][] {
  return shares.alpha.map((alpha) => {
    const total = alpha.reduce((sum, value) => sum + value, 0);
    return alpha.map((value) => value / total);
  });
}
