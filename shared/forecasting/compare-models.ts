import type { Zone } from '../domain/zoned-time.ts';
import type { ArrivalModel, HourlyCounts } from './arrival-model.ts';
import { countHourly } from './count-hourly.ts';
import { countLevels, hoursPerLevel, sumRuns, type CountLevel } from './count-levels.ts';
import { forecastSums } from './evaluate-arrivals.ts';
import { evaluateNeed, needLeads, type NeedLead } from './evaluate-need.ts';
import { makeKnownModels, weeksBefore, type ComparedModel } from './known-models.ts';
import { makeLogTruth } from './log-truth.ts';
import { pairScores, type ComparedScale } from './pair-scores.ts';
import { scoreCount, type ScoredCount } from './score-summary.ts';
import type { CalendarDay, ExposureGap } from './visit-table.ts';

/** A candidate and the model in use, backtested on the same weeks; each difference is the candidate's score less the other's. */
export interface ModelComparison {
  /** First local hour scored, and the hour after the last. */
  fromLocalHour: number;
  toLocalHour: number;
  weeks: number;
  /** Weeks before which both would have been the same fit: on the same visits, by the same method. */
  weeksAlike: number;
  /** Arrivals of the site. */
  arrivals: ({ level: CountLevel } & ComparedScale)[];
  /** Need of the whole department, by hours ahead; empty where the log holds too little. */
  need: ({ leadHours: number } & ComparedScale)[];
  /** Joint draws, replications, and how often each was repeated to tell the error of the simulation. */
  draws: number;
  replications: number;
  batches: number;
}

export interface ComparisonRequest {
  zone: Zone;
  calendar: readonly CalendarDay[];
  capHours: number;
  /** Weeks scored at most, the last of the log. */
  weeks: number;
  candidate: ComparedModel;
  inUse: ComparedModel;
  /** Both were fitted on the same logs. */
  sameLogs: boolean;
  seed: number;
  draws?: number;
  replications?: number;
  batches?: number;
  onProgress?: (share: number) => void;
}

/** No week is scored with less history before it. */
const weeksForFirst = 8;

/**
 * Backtest of a candidate beside the model in use: the same origins, truth and random streams, each with what it would have
 * known (`makeKnownModels`). Scored with the code of the rolling-origin evaluation; differences are paired forecast by forecast,
 * their error by resampling whole weeks, that of the simulation by repeating it with other seeds.
 * Throws a RangeError naming the fault where less than a week can be scored.
 * Cost: twice batches × (weeks × draws × 168 h + 7 weeks × replications), and the fits: about 40 s for 13 weeks of 260 visits a day.
 */
export function compareModels(request: ComparisonRequest): ModelComparison {
  const { zone, calendar, capHours, candidate, inUse, sameLogs, seed, onProgress } = request;
  const { draws = 1000, replications = 300, batches = 2 } = request;
  const sides = [candidate, inUse].map((model) => {
    const { visits, areas, fromUtc, toUtc, gaps } = model;
    return { ...model, counts: countHourly(visits, areas, zone, fromUtc, toUtc, gaps) };
  });
  const [{ counts }] = sides;
  const length = Math.floor(counts.exposureHours.length / 24) * 24;
  const room =
    Math.min(...sides.map((side) => weeksBefore(side, counts.firstLocalHour + length, zone))) - weeksForFirst;
  const weeks = Math.min(request.weeks, Math.floor(room));
  if (!(weeks >= 1)) {
    throw new RangeError(
      `a week can be scored once ${String(weeksForFirst)} weeks lie before it in the visits of each model; there are ${Math.max(0, weeksForFirst + room).toFixed(1)}`,
    );
  }
  const firstOrigin = length - weeks * 168;
  const known = sides.map((side) => makeKnownModels(side, side.counts, zone, calendar, capHours));
  let weeksAlike = 0;
  for (let week = 0; week < weeks; week += 1) {
    const at = counts.firstLocalHour + firstOrigin + 168 * week;
    if (sameLogs && sides.every(({ arrival }) => arrival.endLocalHour > at)) weeksAlike += 1;
  }
  // Where both would have been the same model in every week, one is computed and stands for both.
  const computed = weeksAlike === weeks ? 1 : 2;
  const steps = computed * batches * 2 * weeks;
  let done = 0;
  const step = (): void => {
    done += 1;
    onProgress?.(done / steps);
  };

  const total = Float64Array.from(counts.exposureHours, (_, i) => counts.counts.reduce((sum, own) => sum + own[i], 0));
  const arrivals = sides.slice(0, computed).map((side, s) =>
    Array.from({ length: batches }, (_, b) => {
      const scores: Record<CountLevel, ScoredCount[]> = { hour: [], shift: [], day: [], week: [] };
      for (let week = 0; week < weeks; week += 1) {
        const origin = firstOrigin + 168 * week;
        const model = known[s].arrivalAt(origin, week);
        scoreWeek(scores, model, side.counts, total, origin, week, calendar, draws, seed + 1000 * b);
        step();
      }
      return scores;
    }),
  );

  const tells = makeTells(inUse, zone, capHours);
  const need = sides.slice(0, computed).map((side, s) =>
    Array.from(
      { length: batches },
      (_, b) =>
        evaluateNeed({
          visits: side.visits,
          areas: side.areas,
          zone,
          fromUtc: side.fromUtc,
          toUtc: side.toUtc,
          gaps: side.gaps,
          facts: side.own.facts,
          calendar,
          weeks,
          replications,
          seed: seed + 100_000 * (b + 1),
          capHours,
          tells,
          modelsAt: (origin, week) => ({
            arrival: known[s].arrivalAt(origin, week),
            stay: known[s].stayAt(origin, week),
          }),
          onProgress: step,
        }).scores,
    ),
  );

  const pair = (of: (side: number, batch: number) => ScoredCount[]): ComparedScale =>
    pairScores(
      Array.from({ length: batches }, (_, b) => of(0, b)),
      Array.from({ length: batches }, (_, b) => of(computed - 1, b)),
      seed,
    );
  return {
    fromLocalHour: counts.firstLocalHour + firstOrigin,
    toLocalHour: counts.firstLocalHour + length,
    weeks,
    weeksAlike,
    arrivals: countLevels.map((level) => ({ level, ...pair((s, b) => arrivals[s][b][level]) })),
    need: needLeads
      .map((leadHours) => {
        const lead: NeedLead = `${leadHours}h`;
        return { leadHours, ...pair((s, b) => need[s][b][lead]) };
      })
      .filter(({ n }) => n > 0),
    draws,
    replications,
    batches,
  };
}

/** Adds one week's scores at every level. Hours without exposure are not scored. */
function scoreWeek(
  scores: Record<CountLevel, ScoredCount[]>,
  model: ArrivalModel,
  counts: HourlyCounts,
  total: Float64Array,
  origin: number,
  week: number,
  calendar: readonly CalendarDay[],
  draws: number,
  seed: number,
): void {
  const forecasts = forecastSums(model, counts, origin, 168, calendar, draws, seed + week);
  for (const level of countLevels) {
    const width = hoursPerLevel[level];
    const observed = sumRuns(total, origin, origin + 168, width);
    const naive = sumRuns(total, origin - 168, origin, width);
    const exposure = sumRuns(counts.exposureHours, origin, origin + 168, width);
    observed.forEach((count, i) => {
      if (exposure[i] > 0) scores[level].push(scoreCount(forecasts[level][i], count, week, naive[i]));
    });
  }
}

/** Whether the log tells who was there, outages and its start left out. */
function makeTells(model: ComparedModel, zone: Zone, capHours: number): (at: number) => boolean {
  const { visits, areas, fromUtc, toUtc, gaps } = model;
  const whole: ExposureGap[] = gaps.filter(({ area }) => area === null);
  const truth = makeLogTruth({ visits, areas, zone, capHours, spans: [{ from: fromUtc, to: toUtc }], gaps: whole });
  return (at) => truth.tells(at, at);
}
