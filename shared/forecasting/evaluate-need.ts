import type { Zone } from '../domain/zoned-time.ts';
import type { ArrivalModel, HourlyCounts } from './arrival-model.ts';
import { countHourly } from './count-hourly.ts';
import { firstHours } from './first-hours.ts';
import { fitArrivals } from './fit-arrivals.ts';
import { fitStays } from './fit-stays.ts';
import { histogramForecast } from './histogram-forecast.ts';
import { knownAt } from './known-visits.ts';
import type { OutlookInput } from './outlook-types.ts';
import { prepareNeed } from './prepare-need.ts';
import { presentByHour } from './present-by-hour.ts';
import { refreshLevel } from './refresh-level.ts';
import { brierScore, reliability, type ReliabilityBin } from './scoring.ts';
import { scoreCount, summariseScores, type ScoredCount, type ScoreSummary } from './score-summary.ts';
import { simulateNeedPart } from './simulate-need.ts';
import type { StayModel } from './stay-model.ts';
import type { CalendarDay, ExposureGap, ExtractFacts, VisitTable } from './visit-table.ts';

export const needLeads = [1, 4, 8, 12, 24, 72] as const;
export type NeedLead = `${(typeof needLeads)[number]}h`;

export interface NeedEvaluation {
  /** Need of the whole department, by lead. */
  need: Record<NeedLead, ScoreSummary>;
  /** Need of each area, all areas together, by lead. */
  needByArea: Record<NeedLead, ScoreSummary>;
  /** Chance that an area's need exceeds the 90 % point of its past need, at every lead. */
  shortfall: { brier: number | null; reliability: ReliabilityBin[] };
  outlooks: number;
  /** What the summaries of the department's need are made of, by lead. */
  scores: Record<NeedLead, ScoredCount[]>;
}

/** What is known of arrivals and stays at an origin. */
export interface KnownModels {
  arrival: ArrivalModel;
  stay: StayModel;
}

const daysPerWeek = 7;
const weeksPerChoice = 13;
const weeksPerStayFit = 4;

/**
 * Rolling-origin evaluation of need: an outlook a day at changing hours, each from the census that the log shows at
 * that moment and models that know only what came before (arrival model chosen every 13 weeks, its level refreshed daily;
 * stays fitted every 4 weeks), scored at 1 to 72 h ahead against the log's own count.
 * Origins in the first `capHours` of the log or with too little left of it are not scored.
 * Cost: outlooks × replications × about 0.1 ms.
 */
export function evaluateNeed(input: {
  visits: VisitTable;
  areas: number;
  zone: Zone;
  fromUtc: number;
  toUtc: number;
  facts: ExtractFacts;
  calendar: readonly CalendarDay[];
  weeks: number;
  replications?: number;
  seed?: number;
  capHours?: number;
  /** Time taken out of the exposure. */
  gaps?: readonly ExposureGap[];
  /** Whether the log tells who was there at an instant; it does if left out. */
  tells?: (at: number) => boolean;
  /** Models known at the start of a week (`origin` counts hours into the counts); fitted as told above if left out. */
  modelsAt?: (origin: number, week: number) => KnownModels;
  onProgress?: (share: number) => void;
}): NeedEvaluation {
  const { visits, areas, zone, fromUtc, toUtc, facts, calendar, weeks, modelsAt, onProgress } = input;
  const { replications = 500, seed = 1, capHours = 72, gaps = [], tells = () => true } = input;
  const counts = countHourly(visits, areas, zone, fromUtc, toUtc, gaps);
  const length = Math.floor(counts.exposureHours.length / 24) * 24;
  const firstOrigin = length - weeks * 168;
  if (firstOrigin < 8 * 168) throw new RangeError(`${weeks} weeks of evaluation need 8 weeks before them`);
  const present = presentByHour(visits, areas, capHours);

  const scores = needLeads.map((): ScoredCount[] => []);
  const areaScores = needLeads.map((): ScoredCount[] => []);
  const chances: number[] = [];
  const outcomes: boolean[] = [];
  let outlooks = 0;
  let arrival: ArrivalModel | undefined;
  let stay: StayModel | undefined;
  let beds: number[] = [];
  for (let week = 0; week < weeks; week += 1) {
    const origin = firstOrigin + week * 168;
    const originUtc = utcOf(zone, counts, origin);
    if (modelsAt) ({ arrival, stay } = modelsAt(origin, week));
    else if (week % weeksPerChoice === 0) arrival = fitArrivals({ counts: firstHours(counts, origin), calendar });
    if (week % weeksPerStayFit === 0) {
      if (!modelsAt) {
        stay = fitStays({
          visits: knownAt(visits, originUtc),
          areas,
          zone,
          window: { from: fromUtc, to: originUtc },
          facts: { ...facts, takenAt: originUtc, missingDeparture: 'still present' },
          capHours,
          calendar,
        });
      }
      beds = highPointOfNeed((at) => present.presentAt(at), fromUtc + capHours * 3600, originUtc, areas);
    }
    for (let day = 0; day < daysPerWeek; day += 1) {
      const midnight = origin + 24 * day;
      const midnightUtc = utcOf(zone, counts, midnight);
      // A step of seven hours from day to day visits every part of the day.
      const issuedAt = midnightUtc + ((7 * (day + week)) % 24) * 3600;
      if (issuedAt + 73 * 3600 > toUtc || !arrival || !stay || !tells(issuedAt)) continue;
      const model = { arrival: refreshLevel(arrival, firstHours(counts, midnight)), stay, calendar };
      const outlook = outlookInput(
        issuedAt,
        midnightUtc,
        zone,
        present.censusAt(issuedAt),
        beds,
        counts,
        replications,
        seed + outlooks,
      );
      const part = simulateNeedPart(prepareNeed(model, outlook).plan, 0, replications);
      outlooks += 1;
      needLeads.forEach((lead, l) => {
        if (!tells(issuedAt + lead * 3600)) return;
        const truth = present.presentAt(issuedAt + lead * 3600);
        const before = present.presentAt(issuedAt + lead * 3600 - 168 * 3600);
        const pooled = part.pooledNeed.subarray(l * part.pooledSize, (l + 1) * part.pooledSize);
        const all = truth.reduce((sum, n) => sum + n, 0);
        scores[l].push(
          scoreCount(
            histogramForecast(pooled),
            all,
            week,
            before.reduce((sum, n) => sum + n, 0),
          ),
        );
        for (let a = 0; a < areas; a += 1) {
          const at = (a * part.hours + l) * part.size;
          const forecast = histogramForecast(part.need.subarray(at, at + part.size));
          areaScores[l].push(scoreCount(forecast, truth[a], week, before[a]));
          chances.push(Math.min(1, Math.max(0, 1 - forecast.cdf(beds[a]))));
          outcomes.push(truth[a] > beds[a]);
        }
      });
    }
    onProgress?.((week + 1) / weeks);
  }
  const summarise = (each: readonly ScoredCount[][]): Record<NeedLead, ScoreSummary> =>
    Object.fromEntries(needLeads.map((lead, l) => [`${lead}h`, summariseScores(each[l], 500, seed)])) as Record<
      NeedLead,
      ScoreSummary
    >;
  const byLead = needLeads.map((lead, l) => [`${lead}h`, scores[l]] as const);
  return {
    scores: Object.fromEntries(byLead) as Record<NeedLead, ScoredCount[]>,
    need: summarise(scores),
    needByArea: summarise(areaScores),
    shortfall: { brier: brierScore(chances, outcomes), reliability: reliability(chances, outcomes) },
    outlooks,
  };
}

/** The first instant at or after a place in the counts, whose local time may have been skipped. */
function utcOf(zone: Zone, counts: HourlyCounts, place: number): number {
  const local = (counts.firstLocalHour + place) * 3600;
  return zone.fromLocal(local)[0] ?? zone.fromLocal(local + 3600)[0];
}

/** The 90 % point of each area's past need, looked at every five hours: beds that are short one time in ten. */
function highPointOfNeed(presentAt: (at: number) => number[], from: number, to: number, areas: number): number[] {
  const seen = Array.from({ length: areas }, (): number[] => []);
  for (let at = Math.max(from, to - 180 * 86_400); at < to; at += 5 * 3600) {
    presentAt(at).forEach((n, a) => seen[a].push(n));
  }
  return seen.map((values) => {
    values.sort((a, b) => a - b);
    return values[Math.floor(0.9 * values.length)] ?? 0;
  });
}

function outlookInput(
  issuedAt: number,
  midnightUtc: number,
  zone: Zone,
  census: OutlookInput['areas'][number]['census'][],
  beds: readonly number[],
  counts: HourlyCounts,
  replications: number,
  seed: number,
): OutlookInput {
  const first = Math.floor(zone.toLocal(midnightUtc) / 3600) - counts.firstLocalHour;
  const last = Math.floor(zone.toLocal(issuedAt) / 3600) - counts.firstLocalHour;
  let arrived = 0;
  for (let i = first; i < last; i += 1) for (const area of counts.counts) arrived += area[i];
  return {
    issuedAt,
    timeZone: zone.name,
    hours: needLeads.map((lead) => issuedAt + lead * 3600),
    areas: census.map((own, a) => ({
      areaId: String(a),
      census: own,
      staffedBeds: [{ at: issuedAt, beds: beds[a] }],
      spaces: beds[a],
      safeMinimum: 0,
      bedStep: 1,
      alertLimit: 0.25,
    })),
    undecided: null,
    planningRisk: 0.1,
    shifts: [],
    arrivalsSince: issuedAt > midnightUtc ? { from: midnightUtc, to: issuedAt, count: arrived } : null,
    seed,
    replications,
  };
}
