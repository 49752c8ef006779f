import { weekLeadGroup } from '../domain/record-lead.ts';
import { makeStream } from '../stochastic/random.ts';
import { gather, keepHistogram, type IssuedLaw } from './outlook-laws.ts';
import { smallAreaSpaces } from './printed-shortfall.ts';
import { makeRateDraw } from './rate-draws.ts';
import { makeRateGrid } from './rate-grid.ts';
import { mergeWeekParts, type WeekPart } from './record-week.ts';
import type { PreparedWeek } from './week-outlook.ts';
import type { WeekOutlookResult } from './week-outlook-types.ts';

/** Need is kept at every fourth hour, so that all parts of the day are scored. */
const hoursPerNeed = 4;
/** Tonight scores what lies nearer. */
const firstNeedHours = 24;
const daysKept = 7;
const arrivalDraws = 600;
const week = 7 * 86_400;

/**
 * The distributions behind a week outlook that will be scored, compactly: need at every fourth hour from 25 to 72 h ahead, the
 * highest need and the arrivals of each shift that begins within 72 h, and the arrivals of each of the next seven days; each
 * area and the department. Its percentiles do not suffice: log score, exact mass and PIT need the whole law.
 * Cost: some tens of ms; about 60 kB as JSON for five areas.
 */
export function weekLaws(prepared: PreparedWeek, parts: readonly WeekPart[], result: WeekOutlookResult): IssuedLaw[] {
  const part = mergeWeekParts(parts);
  return [...needLaws(prepared, part, result), ...peakLaws(prepared, part, result), ...arrivalLaws(prepared)];
}

function needLaws({ input }: PreparedWeek, part: WeekPart, result: WeekOutlookResult): IssuedLaw[] {
  const allCounted = input.areas.every(({ census }) => census !== null);
  return input.hours.flatMap((at, h) => {
    const ahead = Math.round((at - input.issuedAt) / 3600);
    const leadHours = weekLeadGroup(at - input.issuedAt);
    if (ahead <= firstNeedHours || ahead % hoursPerNeed !== 0 || leadHours === null) return [];
    const common = { measure: 'need' as const, leadHours, shift: null, from: at, to: at };
    const own = input.areas.flatMap((area, a): IssuedLaw[] => {
      if (area.census === null) return [];
      const place = (a * input.hours.length + h) * part.size;
      const { shortfall, shortfallWithin } = result.areas[a];
      return [
        {
          ...common,
          areaId: area.areaId,
          law: keepHistogram(part.need.subarray(place, place + part.size)),
          chance: (area.spaces <= smallAreaSpaces ? shortfallWithin : shortfall)[h],
        },
      ];
    });
    if (!allCounted) return own;
    const pooled = part.pooledNeed.subarray(h * part.pooledSize, (h + 1) * part.pooledSize);
    const chance = result.department.someAreaShort[h];
    return [...own, { ...common, areaId: null, law: keepHistogram(pooled), chance }];
  });
}

/** Shifts that begin after the outlook, as they are simulated: until the next one takes over. */
function peakLaws({ input, plan }: PreparedWeek, part: WeekPart, result: WeekOutlookResult): IssuedLaw[] {
  const allCounted = input.areas.every(({ census }) => census !== null);
  return input.shifts.flatMap(({ name, from, to }, s) => {
    const leadHours = from > input.issuedAt ? weekLeadGroup(from - input.issuedAt) : null;
    if (leadHours === null) return [];
    const next = input.shifts.slice(s + 1).find((later) => later.from > from);
    const common = {
      measure: 'peak' as const,
      leadHours,
      shift: name,
      from,
      to: next && next.from < to ? next.from : to,
    };
    const own = input.areas.flatMap((area, a): IssuedLaw[] => {
      if (area.census === null) return [];
      const place = (a * plan.shiftTo.length + s) * part.size;
      const law = keepHistogram(part.shiftPeak.subarray(place, place + part.size));
      return [{ ...common, areaId: area.areaId, law, chance: result.areas[a].shifts[s].someTime }];
    });
    // Of the department only the chance that some area is short was shown.
    const chance = result.department.shifts[s].someAreaShort;
    return allCounted ? [...own, { ...common, areaId: null, law: null, chance }] : own;
  });
}

function arrivalLaws({ input, model, zone, days, live }: PreparedWeek): IssuedLaw[] {
  const spans = [
    ...days.slice(1, 1 + daysKept).map(({ from, to }, d) => ({
      common: { measure: 'arrivals' as const, leadHours: 24 * (d + 1), shift: null, from, to, chance: null },
    })),
    ...input.shifts.flatMap(({ name, from, to }) => {
      const leadHours = from > input.issuedAt ? weekLeadGroup(from - input.issuedAt) : null;
      if (leadHours === null) return [];
      return [{ common: { measure: 'shift arrivals' as const, leadHours, shift: name, from, to, chance: null } }];
    }),
  ];
  const until = Math.max(...spans.map(({ common }) => common.to));
  if (!(until - input.issuedAt < 2 * week)) return [];
  const grid = makeRateGrid(zone, input.issuedAt, until);
  const endOf = (i: number): number => grid.startAt[i + 1] ?? until;
  const parts = spans.map(({ common: { from, to } }) =>
    Array.from(grid.startAt, (start, i) => Math.max(0, Math.min(to, endOf(i)) - Math.max(from, start)) / 3600),
  );
  const areas = model.arrival.areas.length;
  const draw = makeRateDraw(model.arrival, grid, model.calendar, live ?? undefined);
  const rates = model.arrival.areas.map(() => new Float64Array(grid.hours.length));
  const sums = spans.map(() => Array.from({ length: areas + 1 }, () => new Float64Array(arrivalDraws)));
  for (let r = 0; r < arrivalDraws; r += 1) {
    draw(makeStream(input.seed, 13, r), rates);
    sums.forEach((own, s) => {
      rates.forEach((rate, a) => {
        let sum = 0;
        for (let i = 0; i < rate.length; i += 1) sum += rate[i] * parts[s][i];
        own[a][r] = sum;
        own[areas][r] += sum;
      });
    });
  }
  return spans.flatMap(({ common }, s) =>
    sums[s].map((means, a) => ({
      ...common,
      areaId: a < areas ? input.areas[a].areaId : null,
      law: { means: gather(means) },
    })),
  );
}
