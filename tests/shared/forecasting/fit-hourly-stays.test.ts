import { expect, test } from 'vitest';
import { instantsOfLocalHour } from '../../../shared/domain/local-hour-span.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { withCountedArrivals, type CountedHours } from '../../../shared/forecasting/counted-hours.ts';
import { countHourly } from '../../../shared/forecasting/count-hourly.ts';
import { fitHourlyStays } from '../../../shared/forecasting/fit-hourly-stays.ts';
import { blockHazards, streamsPerArea } from '../../../shared/forecasting/stay-model.ts';
import type { VisitTable } from '../../../shared/forecasting/visit-table.ts';
import { issueOutlook } from '../../../shared/forecasting/issue-outlook.ts';
import {
  buildOutlookInput,
  buildOutlookModel,
  logDays,
  logFrom,
  logTo,
  outlookZone,
} from '../../support/build-outlook-model.ts';
import { simulateStayLog, type StayLogTruth } from '../../support/simulate-stay-log.ts';

const london = makeZone('Europe/London');
const zone = london;
/** 2026-01-05T00:00Z, a Monday. */
const start0 = 1_767_571_200;
const from = start0;
const day = 86_400;

const truth = (over: Partial<StayLogTruth>): StayLogTruth => ({
  zone,
  from,
  days: 200,
  areas: [
    {
      ratePerHour: (hour) => (hour >= 9 && hour < 22 ? 6 : 2),
      shares: [0.6, 0.3, 0.05, 0.05],
      hazard: [0.25, 0.25, 0.25, 0.25],
    },
    {
      ratePerHour: (hour) => (hour >= 9 && hour < 22 ? 1 : 0.4),
      shares: [1, 0, 0, 0],
      hazard: [0.5, 0.5, 0.5, 0.5],
    },
  ],
  hourFactor: () => 1,
  outflow: [
    { variance: 0, correlation: 0 },
    { variance: 0, correlation: 0 },
  ],
  stayShape: 1,
  seed: 11,
  ...over,
});

/** What a site that may not share times would write down of a log. */
function countsOf(
  visits: VisitTable,
  areas: number,
  to: number,
  withDepartures = true,
  zone = london,
  from = start0,
): CountedHours {
  const first = Math.floor(zone.toLocal(from) / 3600);
  const last = Math.floor(zone.toLocal(to - 1) / 3600);
  const rows: [number, number, number, number][] = [];
  const hours = last - first + 1;
  const came = Array.from({ length: areas }, () => new Int32Array(hours));
  const left = Array.from({ length: areas }, () => new Int32Array(hours));
  for (let i = 0; i < visits.length; i += 1) {
    const add = (into: Int32Array[], at: number) => {
      if (at >= from && at < to) into[visits.area[i]][Math.floor(zone.toLocal(at) / 3600) - first] += 1;
    };
    add(came, visits.arrivalAt[i]);
    add(left, visits.departureAt[i]);
  }
  for (let area = 0; area < areas; area += 1) {
    for (let h = 0; h < hours; h += 1) {
      if (zone.fromLocal((first + h) * 3600).length > 0)
        rows.push([area, first + h, came[area][h], withDepartures ? left[area][h] : NaN]);
    }
  }
  return {
    length: rows.length,
    area: Uint8Array.from(rows, ([area]) => area),
    localHour: Int32Array.from(rows, ([, localHour]) => localHour),
    arrivals: Int32Array.from(rows, ([, , arrivals]) => arrivals),
    departures: Float64Array.from(rows, ([, , , departures]) => departures),
  };
}

// The log begins ten days before its counts do, so that nobody knows how many were there at first.
const start = 10 * day;
function fit(
  over: Partial<StayLogTruth> = {},
  asStated: Map<number, { meanHours: number }> | null = null,
  departures = true,
) {
  const { visits } = simulateStayLog(truth({ from: from - start, ...over }));
  const to = from + 180 * day;
  const counted = countsOf(visits, 2, to, departures);
  const stays = [0, 1].map((area) => {
    let sum = 0;
    let count = 0;
    for (let i = 0; i < visits.length; i += 1) {
      if (visits.area[i] !== area || visits.arrivalAt[i] < from || visits.arrivalAt[i] >= to) continue;
      sum += (visits.departureAt[i] - visits.arrivalAt[i]) / 3600;
      count += 1;
    }
    return sum / count;
  });
  const stated = asStated ?? new Map(stays.map((meanHours, area) => [area, { meanHours }]));
  const fitted = fitHourlyStays({
    counted,
    areas: 2,
    zone,
    window: { from, to },
    gaps: [],
    stated,
    capHours: 72,
    calendar: [],
  });
  return { ...fitted, stays, visits, counted, to };
}
const meanOf = (hazard: { shape: number; rate: number }) => hazard.rate / hazard.shape;

test('with departures the mean stay is the stated one, and no surer', () => {
  const { stay, source, stays } = fit();
  expect(source).toBe('departures by hour');
  // Little's law (1961): patient-hours over departures are the mean stay.
  [0, 1].forEach((area) => {
    const { hazard } = stay.streams[area * streamsPerArea];
    expect(Math.abs(meanOf(hazard) / stays[area] - 1)).toBeLessThan(0.03);
    expect(hazard.shape).toBeLessThanOrEqual(25);
  });
});

test('counts that show longer stays than were stated are believed, and it is said', () => {
  const { stay } = fit({}, new Map([0, 1].map((area) => [area, { meanHours: 0.3 }])));
  expect(meanOf(stay.streams[0].hazard)).toBeGreaterThan(1);
  expect(stay.cautions.join(' ')).toMatch(/Area 1: its counts show stays of [\d.]+ h at least, longer than stated/);
});

test('a pace of leaving that differs through the day is found by block', () => {
  const { stay } = fit({ hourFactor: (hour) => (hour >= 8 && hour < 20 ? 1.3 : 0.7) });
  const hazards = blockHazards(stay.streams[0]);
  const mean = (blocks: number[]) => blocks.reduce((sum, block) => sum + hazards[block], 0) / blocks.length;
  const byDay = mean([5, 6, 7, 8]);
  const byNight = mean([11, 0, 1, 2]);
  // Truth: 1.3 / 0.7.
  expect(byDay / byNight).toBeGreaterThan(1.6);
  expect(byDay / byNight).toBeLessThan(2.1);
});

test('every disposition of an area has the same hazard, so that what is not known moves nothing', () => {
  const { stay } = fit();
  for (const s of [1, 2, 3]) expect(stay.streams[s].hazard).toEqual(stay.streams[0].hazard);
  expect(stay.shares[0].alpha[0][0]).toBeGreaterThan(1e5);
});

test('days that differ in how fast patients leave are found', () => {
  const { stay } = fit({
    outflow: [
      { variance: 0.04, correlation: 0.5 },
      { variance: 0.04, correlation: 0.5 },
    ],
    areas: [{ ...truth({}).areas[0], shares: [1, 0, 0, 0] }, truth({}).areas[1]],
  });
  expect(stay.outflow.others.variance).toBeGreaterThan(0.02);
  expect(stay.outflow.others.variance).toBeLessThan(0.07);
});

test('without departures the stated mean is used, and said to be no measurement', () => {
  const { stay, source } = fit({}, new Map([0, 1].map((area) => [area, { meanHours: 3 + area }])), false);
  expect(source).toBe('stated mean');
  expect(meanOf(stay.streams[0].hazard)).toBeCloseTo(3, 9);
  expect(meanOf(stay.streams[streamsPerArea].hazard)).toBeCloseTo(4, 9);
  // 95 % limits of a gamma law of shape 25: 0.647 and 1.428 of its mean (R: qgamma(c(0.025, 0.975), 25) / 25, from memory);
  // the χ² limits of a rate from 25 departures are those of shapes 25 and 25.
  const [low, high] = stay.streams[0].limits ?? [NaN, NaN];
  expect(low * 3).toBeGreaterThan(0.6);
  expect(low * 3).toBeLessThan(0.7);
  expect(high * 3).toBeGreaterThan(1.4);
  expect(high * 3).toBeLessThan(1.52);
  expect(stay.cautions.join(' ')).toContain('Area 1: a mean stay of 3.0 h is stated, not measured;');
});

test('without a stated mean it is refused, naming the area', () => {
  expect(() => fit({}, new Map([[0, { meanHours: 3 }]]), false)).toThrow('no mean length of stay is stated for area 2');
});

test('departures that do not balance arrivals are left aside, and it is said', () => {
  const { counted, to } = fit();
  const half = { ...counted, departures: counted.departures.map((n) => Math.floor(n / 2)) };
  const stated = new Map([0, 1].map((area) => [area, { meanHours: 4 }]));
  const request = { areas: 2, zone, window: { from, to }, gaps: [], capHours: 72, calendar: [], stated };
  const { stay, source } = fitHourlyStays({ ...request, counted: half });
  expect(source).toBe('stated mean');
  expect(stay.cautions.join(' ')).toMatch(
    /patients came to area 1 and [\d,]+ left in the same hours: they do not balance/,
  );
});

test('counted arrivals are counted again hour by hour, over both clock changes', () => {
  const { counted, to } = fit();
  const empty = simulateStayLog(truth({ days: 0 })).visits;
  const counts = countHourly(withCountedArrivals(empty, counted, zone), 2, zone, from, to);
  for (let row = 0; row < counted.length; row += 1) {
    const at = counted.localHour[row] - counts.firstLocalHour;
    expect(counts.counts[counted.area[row]][at]).toBe(counted.arrivals[row]);
  }
});

test('a local hour that comes twice lasts two hours, one cut by a half-hour change lasts as long as there is of it', () => {
  // 2026-10-25 01:00 comes twice in London (tz database: Europe/London ends summer time at 01:00 UTC).
  const london = instantsOfLocalHour(zone, Date.UTC(2026, 9, 25, 1) / 3_600_000);
  expect(london).toEqual({ from: Date.UTC(2026, 9, 25, 0) / 1000, to: Date.UTC(2026, 9, 25, 2) / 1000 });
  // Lord Howe goes from +10:30 to +11 at 02:00 on 2026-10-04: of the hour from 02:00 the first half is skipped.
  const lordHowe = makeZone('Australia/Lord_Howe');
  const cut = instantsOfLocalHour(lordHowe, Date.UTC(2026, 9, 4, 2) / 3_600_000);
  expect(cut.to - cut.from).toBe(1800);
  expect(() => instantsOfLocalHour(zone, Date.UTC(2026, 2, 29, 1) / 3_600_000)).toThrow('skipped');
});

test('an outlook on counts has a finite figure everywhere and needs about the beds that one on visits does', () => {
  const model = buildOutlookModel();
  const input = buildOutlookInput();
  // The log that the model was fitted on, written down as counts by a site in Toronto.
  const { visits } = simulateStayLog({
    zone: outlookZone,
    from: logFrom,
    days: logDays,
    areas: [
      { ratePerHour: (h) => (h < 8 ? 2 : 5), shares: [0.6, 0.28, 0.05, 0.07], hazard: [0.3, 0.14, 0.2, 0.45] },
      { ratePerHour: (h) => (h < 8 ? 0.4 : 1), shares: [0.4, 0.5, 0.08, 0.02], hazard: [0.4, 0.2, 0.25, 0.5] },
    ],
    hourFactor: (h, weekend) => (h < 6 ? 0.6 : 1.2) * (weekend ? 0.85 : 1),
    outflow: [
      { variance: 0.02, correlation: 0.5 },
      { variance: 0.06, correlation: 0.6 },
    ],
    stayShape: 1,
    seed: 5,
  });
  const window = { from: logFrom, to: logTo };
  const { stay } = fitHourlyStays({
    counted: countsOf(visits, 2, logTo, true, outlookZone, logFrom),
    areas: 2,
    zone: outlookZone,
    window,
    gaps: [],
    stated: new Map([
      [0, { meanHours: 4.2 }],
      [1, { meanHours: 3.4 }],
    ]),
    capHours: 72,
    calendar: [],
  });
  const onVisits = issueOutlook(model, input);
  const onCounts = issueOutlook({ ...model, stay }, input);
  const isFinite = (value: unknown): boolean =>
    typeof value === 'number'
      ? Number.isFinite(value)
      : value === null || typeof value !== 'object' || Object.values(value).every(isFinite);
  expect(isFinite(onCounts)).toBe(true);
  // From the same census; one pace for all in place of slow admitted patients loses some beds of the later hours.
  for (const h of [3, 8, 16, 23]) {
    const [seen, counted] = [onVisits.areas[0].need.p50[h], onCounts.areas[0].need.p50[h]];
    expect(Math.abs(counted - seen), `hour ${String(h)}: ${String(counted)} for ${String(seen)}`).toBeLessThan(4);
  }
});
