import { bedsAt } from '../../../shared/domain/bed-schedule.ts';
import { instantOfLocal, shiftInCharge, shiftsBetween } from '../../../shared/domain/shift-times.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { makeLogTruth } from '../../../shared/forecasting/log-truth.ts';
import { forecastOfLaw, type IssuedLaw } from '../../../shared/forecasting/outlook-laws.ts';
import type { OutlookInput } from '../../../shared/forecasting/outlook-types.ts';
import { makePastBaselines, pastRuleNames, type PastRule } from '../../../shared/forecasting/past-baselines.ts';
import { smallAreaSpaces } from '../../../shared/forecasting/printed-shortfall.ts';
import { lossesOf, scoreIssued } from '../../../shared/forecasting/score-issued.ts';
import { makeStream } from '../../../shared/stochastic/random.ts';
import type { Span } from '../../database/counting-spans.ts';
import { coveredSpans } from '../../database/covered-spans.ts';
import { readSiteVisits } from '../../database/read-visits.ts';
import type { OutlookLawsRow } from '../../entities/OutlookLawsRow.ts';
import type { ScoredOutlook, ScoreTask, ScoreValues } from './score-request.ts';

/** An outlook as the scoring thread reads it. */
export interface StoredOutlook {
  id: string;
  issuedAt: number;
  laws: string;
  trigger: string;
  modelId: string;
  seed: number;
  input: string;
}

const day = 86_400;
/** What the baselines of a year and the dispersion before them reach back to. */
const reachBackSeconds = (52 + 27) * 7 * day;

interface Found {
  observed: number;
  short: boolean | null;
}

/**
 * Makes the function that scores one stored outlook against the logs. Scored are need at the fixed leads, of outlooks issued by
 * the clock (one on saving is no fair sample); and a shift's highest need or a day's arrivals, of the last outlook before it
 * starts. Of week outlooks all is scored that those of the daily timetable said, by how far ahead it lay. The chance is held
 * against the staffed beds that the outlook was issued with.
 */
export function makeOutlookScorer(
  task: ScoreTask & { kind: 'score' },
  withdrawn: readonly Span[],
  acknowledgements: readonly { areaId: string; hours: string }[],
): (outlook: StoredOutlook, nextIssuedAt: number | null) => ScoredOutlook {
  const zone = makeZone(task.timeZone);
  const { table, areaIds, lineage } = readSiteVisits(
    task.databaseFile,
    task.siteId,
    task.issuedFrom - reachBackSeconds - task.stayCapHours * 3600,
  );
  const spans = coveredSpans(lineage, task.now, task.stayCapHours * 3600);
  const first = task.issuedFrom - reachBackSeconds - task.stayCapHours * 3600;
  const truth = makeLogTruth({
    visits: table,
    areas: areaIds.length,
    zone,
    capHours: task.stayCapHours,
    spans: spans.map(({ from, to }) => ({ from: Math.max(from, first), to })).filter(({ from, to }) => to > from),
    gaps: task.gaps,
  });
  const seenHours = acknowledgements.map(({ areaId, hours }) => ({ areaId, hours: JSON.parse(hours) as number[] }));
  const isSeen = (areaId: string | null, from: number, to: number): boolean =>
    seenHours.some(
      (seen) => (areaId === null || seen.areaId === areaId) && seen.hours.some((at) => at >= from && at <= to),
    );
  const total = (values: readonly number[], area: number | null): number =>
    area === null ? values.reduce((sum, value) => sum + value, 0) : values[area];
  const areaKeys = [null, ...areaIds.keys()];
  const hourly = new Map(
    areaKeys.map((area) => [area, makePastBaselines((hour) => totalOrNaN(truth.atLocalHour(hour), area), 168, 5)]),
  );
  const daily = new Map(
    areaKeys.map((area) => [area, makePastBaselines((date) => totalOrNaN(truth.onLocalDay(date), area), 7, 1)]),
  );
  function totalOrNaN(values: number[] | null, area: number | null): number {
    return values === null ? NaN : total(values, area);
  }

  function observe(law: IssuedLaw, input: OutlookInput, area: number | null): Found | null {
    const beds = areaIds.map((id) => input.areas.find((each) => each.areaId === id)?.staffedBeds ?? []);
    if (law.measure === 'shift arrivals') {
      const counts = truth.arrivalsIn(law.from, law.to);
      return counts && { observed: total(counts, area), short: null };
    }
    if (law.measure === 'arrivals') {
      const counts = truth.onLocalDay(Math.round(zone.toLocal(law.from) / day));
      return counts && { observed: total(counts, area), short: null };
    }
    if (law.measure === 'peak') {
      if (!truth.tells(law.from, law.to)) return null;
      const peaks = truth.peaks(law.from, law.to, beds);
      if (area === null)
        return { observed: peaks.some(({ short }) => short) ? 1 : 0, short: peaks.some((p) => p.short) };
      return { observed: peaks[area].peak, short: peaks[area].short };
    }
    if (!truth.tells(law.from, law.from)) return null;
    const present = truth.presentAt(law.from);
    const shortAt = (a: number): boolean => beds[a].length > 0 && present[a] > bedsAt(beds[a], law.from);
    if (area === null) return { observed: total(present, null), short: areaIds.some((_, a) => shortAt(a)) };
    const spaces = input.areas.find((each) => each.areaId === areaIds[area])?.spaces ?? 0;
    if (spaces > smallAreaSpaces) return { observed: present[area], short: shortAt(area) };
    // A small area printed the chance of any shortfall within the hour.
    const after = Math.max(law.from - 3600, input.issuedAt);
    return { observed: present[area], short: truth.shortWithin(after, law.from, beds)[area] };
  }

  function baselinesOf(law: IssuedLaw, area: number | null, observed: number) {
    if (law.measure === 'peak') return { naiveError: null, baselines: null };
    if (law.measure === 'shift arrivals') {
      const before = truth.arrivalsIn(weekBefore(law.from), weekBefore(law.to));
      return { naiveError: before && Math.abs(observed - total(before, area)), baselines: null };
    }
    const [make, step, period] =
      law.measure === 'need'
        ? [hourly.get(area), Math.floor(zone.toLocal(law.from) / 3600), 168]
        : [daily.get(area), Math.round(zone.toLocal(law.from) / day), 7];
    const valueAt = (at: number): number =>
      totalOrNaN(law.measure === 'need' ? truth.atLocalHour(at) : truth.onLocalDay(at), area);
    // The first step of the week, Monday 00:00.
    const weekStart = period === 7 ? 7 * Math.floor((step + 3) / 7) - 3 : 168 * Math.floor((step + 72) / 168) - 72;
    const found: Partial<Record<PastRule, { pinball: number; error: number }>> = {};
    for (const rule of pastRuleNames) {
      const forecast = make?.(rule, step, weekStart);
      if (forecast) found[rule] = lossesOf(forecast, observed);
    }
    const before = valueAt(step - period);
    return {
      naiveError: Number.isNaN(before) ? null : Math.abs(observed - before),
      baselines: Object.keys(found).length > 0 ? JSON.stringify(found) : null,
    };
  }

  const weekBefore = (at: number): number => instantOfLocal(zone, zone.toLocal(at) - 7 * day);

  function scoreLaw(law: IssuedLaw, outlook: StoredOutlook, input: OutlookInput, index: number): ScoreValues | null {
    const area = law.areaId === null ? null : areaIds.indexOf(law.areaId);
    if (area === -1) return null;
    const found = observe(law, input, area);
    if (found === null) return null;
    const v = makeStream(outlook.seed, task.of === 'week' ? 18 : 17, index).uniform();
    const scored =
      law.law === null
        ? null
        : scoreIssued(
            forecastOfLaw(law.law),
            found.observed,
            v,
            law.measure === 'arrivals' || law.measure === 'shift arrivals' ? 'known rates' : 'its own law',
          );
    const past = scored === null ? { naiveError: null, baselines: null } : baselinesOf(law, area, found.observed);
    const shift =
      law.shift ??
      (law.measure === 'need'
        ? (shiftInCharge(shiftsBetween(zone, task.shifts, law.from, law.from + 1), law.from)?.name ?? '')
        : '');
    return [
      task.siteId,
      task.of === 'week' ? null : outlook.id,
      task.of === 'week' ? outlook.id : null,
      task.approvedAs[outlook.modelId] ?? outlook.modelId,
      law.areaId ?? '',
      law.measure,
      law.leadHours,
      shift,
      law.from,
      law.to,
      Math.floor((Math.floor(zone.toLocal(law.from) / day) + 3) / 7),
      isSeen(law.areaId, law.from, law.measure === 'peak' ? law.to : law.from) && law.chance !== null ? 1 : 0,
      outlook.trigger === 'recomputed' ? 1 : 0,
      found.observed,
      scored?.logScore ?? null,
      scored?.absoluteError ?? null,
      past.naiveError,
      scored === null ? null : JSON.stringify(scored.pinball),
      scored === null ? null : JSON.stringify(scored.intervals),
      scored?.median ?? null,
      scored?.pitLower ?? null,
      scored?.pitUpper ?? null,
      scored?.pit ?? null,
      scored?.floorPinball ?? null,
      scored?.floorError ?? null,
      past.baselines,
      law.chance,
      found.short === null || law.chance === null ? null : found.short ? 1 : 0,
    ];
  }

  const byClock = new Set(task.of === 'week' ? ['daily', 'recomputed'] : ['timetable', 'recomputed']);
  return (outlook, nextIssuedAt) => {
    const input = JSON.parse(outlook.input) as OutlookInput;
    const laws = JSON.parse(outlook.laws) as IssuedLaw[];
    const scores: ScoreValues[] = [];
    const missing = { yet: 0, withdrawn: 0, unrecorded: 0 };
    let due = 0;
    laws.forEach((law, index) => {
      const isDue =
        task.of === 'week' || law.measure === 'need'
          ? byClock.has(outlook.trigger)
          : nextIssuedAt === null || nextIssuedAt > law.from;
      if (!isDue) return;
      due += 1;
      // The last before its start is known only once it has started.
      const row = law.to < task.now ? scoreLaw(law, outlook, input, index) : null;
      if (row !== null) scores.push(row);
      else if (truth.unrecorded(law.from, Math.max(law.from, law.to - 1))) missing.unrecorded += 1;
      else if (withdrawn.some((log) => log.from <= law.from && law.from < log.to)) missing.withdrawn += 1;
      else missing.yet += 1;
    });
    return { outlookId: outlook.id, state: stateOf(due, scores.length, missing), scores };
  };
}

function stateOf(
  due: number,
  scored: number,
  missing: { yet: number; withdrawn: number; unrecorded: number },
): OutlookLawsRow['state'] {
  if (due === 0) return 'overtaken';
  if (missing.withdrawn > 0) return 'withdrawn';
  if (missing.yet > 0) return 'waiting';
  return scored > 0 ? 'scored' : 'not recorded';
}
