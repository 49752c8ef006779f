import { beforeAll, describe, expect, it } from 'vitest';
import { censusAt } from '../../../demo/census-at.ts';
import { demoSeed, demoSites } from '../../../demo/farrowmere.ts';
import { makeVisitLog } from '../../../demo/make-visit-log.ts';
import type { DemoVisit } from '../../../demo/make-visit-log.ts';
import { localDate, makeZone } from '../../../shared/domain/zoned-time.ts';

const [general, saltby] = demoSites;
const zone = makeZone('Europe/London');
const utc = (text: string) => Date.parse(text) / 1000;
const year = { from: utc('2025-01-01T00:00:00Z'), to: utc('2026-01-01T00:00:00Z') };

function dayTotals(visits: readonly DemoVisit[]): number[] {
  const totals = new Map<string, number>();
  for (const { arrivalAt } of visits) {
    const date = localDate(zone.toLocal(arrivalAt));
    totals.set(date, (totals.get(date) ?? 0) + 1);
  }
  return [...totals.values()];
}

function meanOf(values: readonly number[]): number {
  return values.reduce((sum, value) => sum + value, 0) / values.length;
}

function dispersion(counts: readonly number[]): number {
  const mean = meanOf(counts);
  return counts.reduce((sum, count) => sum + (count - mean) ** 2, 0) / (counts.length - 1) / mean;
}

describe('makeVisitLog', () => {
  let visits: DemoVisit[];
  let small: DemoVisit[];
  beforeAll(() => {
    visits = makeVisitLog({ site: general, ...year, seed: demoSeed });
    small = makeVisitLog({ site: saltby, ...year, seed: demoSeed });
  });

  it('brings about 260 and 70 visits a day', () => {
    const days = meanOf(dayTotals(visits));
    expect(days).toBeGreaterThan(250);
    expect(days).toBeLessThan(270);
    const smallDays = meanOf(dayTotals(small));
    expect(smallDays).toBeGreaterThan(66);
    expect(smallDays).toBeLessThan(75);
  });

  it('gives the same digits for the same seed and others for another', () => {
    const window = { site: saltby, from: year.from, to: year.from + 7 * 86_400 };
    const again = makeVisitLog({ ...window, seed: demoSeed });
    expect(again).toEqual(makeVisitLog({ ...window, seed: demoSeed }));
    expect(again).not.toEqual(makeVisitLog({ ...window, seed: demoSeed + 1 }));
  });

  it('gives a day the same visits whichever window is asked for', () => {
    const from = utc('2025-06-14T03:20:00Z');
    const to = from + 86_400;
    const wide = visits.filter(({ arrivalAt }) => arrivalAt >= from && arrivalAt < to);
    // Long enough after the day for everybody to have left.
    const narrow = makeVisitLog({ site: general, from, to: to + 20 * 86_400, seed: demoSeed });
    expect(narrow.filter(({ arrivalAt }) => arrivalAt < to)).toEqual(wide);
  });

  it('leaves out what has not happened yet at the end of the window, and nothing else', () => {
    const to = utc('2025-06-14T22:00:00Z');
    const known = makeVisitLog({ site: general, from: to - 86_400, to, seed: demoSeed });
    const later = visits.filter(({ arrivalAt }) => arrivalAt >= to - 86_400 && arrivalAt < to);
    expect(known.map(({ arrivalAt }) => arrivalAt)).toEqual(later.map(({ arrivalAt }) => arrivalAt));
    const present = later.filter(({ departureAt }) => (departureAt ?? Infinity) >= to);
    expect(known.filter(({ departureAt }) => departureAt === null)).toHaveLength(present.length);
    for (const visit of known) {
      for (const at of [visit.bedSpaceAt, visit.admissionDecisionAt, visit.departureAt])
        expect(at ?? 0).toBeLessThan(to);
      expect(visit.disposition === null).toBe(visit.departureAt === null);
    }
  });

  it('puts the events of a visit in order', () => {
    for (const visit of visits) {
      const { arrivalAt, bedSpaceAt, admissionDecisionAt, departureAt, disposition } = visit;
      if (departureAt !== null && !(departureAt > arrivalAt))
        expect.fail(`leaves before arriving: ${JSON.stringify(visit)}`);
      const last = [arrivalAt, bedSpaceAt, admissionDecisionAt, departureAt].filter((at) => at !== null);
      if (last.some((at, i) => i > 0 && at < last[i - 1])) expect.fail(`out of order: ${JSON.stringify(visit)}`);
      if (disposition === 'left before treatment' && bedSpaceAt !== null)
        expect.fail('left before treatment, from a bed space');
      if (disposition === 'admitted' && admissionDecisionAt === null) expect.fail('admitted without a decision');
    }
    expect(visits.every((visit, i) => i === 0 || visit.arrivalAt >= visits[i - 1].arrivalAt)).toBe(true);
  });

  // Independent hours would give 1; real departments show 1.2 to 1.9 and more in day totals, hours nearly Poisson.
  it('varies more from day to day than a Poisson count, and hardly within an hour', () => {
    expect(dispersion(dayTotals(visits))).toBeGreaterThan(1.4);
    expect(dispersion(dayTotals(visits))).toBeLessThan(3);
    const oneHour = new Map<string, number>();
    for (let day = 0; day < 365; day += 1) oneHour.set(localDate(zone.toLocal(year.from + day * 86_400)), 0);
    for (const { arrivalAt } of visits) {
      const local = zone.toLocal(arrivalAt);
      if (Math.floor((local % 86_400) / 3600) === 3) {
        const date = localDate(local);
        oneHour.set(date, (oneHour.get(date) ?? 0) + 1);
      }
    }
    const hourly = dispersion([...oneHour.values()]);
    expect(hourly).toBeGreaterThan(0.85);
    expect(hourly).toBeLessThan(1.5);
  });

  // Clock changes of 2025 in this zone, by law at 01:00 UTC: 30 March forward, 26 October back (2000/84/EC, kept in law).
  it('skips the hour that spring skips and fills the hour that autumn repeats twice', () => {
    const localHours = (date: string, hour: number) =>
      visits.filter(({ arrivalAt }) => {
        const local = zone.toLocal(arrivalAt);
        return localDate(local) === date && Math.floor((local % 86_400) / 3600) === hour;
      });
    expect(localHours('2025-03-30', 1)).toHaveLength(0);
    expect(localHours('2025-03-30', 2).length).toBeGreaterThan(0);
    const repeated = localHours('2025-10-26', 1);
    const first = repeated.filter(({ arrivalAt }) => arrivalAt < utc('2025-10-26T01:00:00Z'));
    expect(first.length).toBeGreaterThan(0);
    expect(repeated.length - first.length).toBeGreaterThan(0);
  });

  it('writes nothing during the outage unless a head count asks', () => {
    const from = utc('2025-03-12T00:30:00Z');
    const to = utc('2025-03-12T08:00:00Z');
    const within = (rows: readonly DemoVisit[]) =>
      rows.filter(({ arrivalAt }) => arrivalAt >= from && arrivalAt < to).length;
    expect(within(visits)).toBe(0);
    const all = makeVisitLog({ site: general, from: from - 3600, to: to + 3600, seed: demoSeed, withUnrecorded: true });
    expect(within(all)).toBeGreaterThan(20);
  });

  it('sends patients home more slowly at night and boarding patients on around noon', () => {
    // Departures an hour over patients at risk an hour, by hour of the clock.
    const hazard = (fromHour: number, toHour: number, start: (visit: DemoVisit) => number | null) => {
      let left = 0;
      let atRisk = 0;
      for (const visit of visits) {
        const begin = start(visit);
        if (visit.areaId !== 'farrowmere-general-acute' || begin === null || visit.departureAt === null) continue;
        for (let at = begin; at < visit.departureAt; at += 900) {
          const hour = Math.floor((zone.toLocal(at) % 86_400) / 3600);
          if (hour >= fromHour && hour < toHour) atRisk += 0.25;
        }
        const hour = Math.floor((zone.toLocal(visit.departureAt) % 86_400) / 3600);
        if (hour >= fromHour && hour < toHour) left += 1;
      }
      return left / atRisk;
    };
    const home = (visit: DemoVisit) => (visit.disposition === 'home' ? visit.bedSpaceAt : null);
    expect(hazard(1, 6, home)).toBeLessThan(0.8 * hazard(11, 17, home));
    const boarding = (visit: DemoVisit) => visit.admissionDecisionAt;
    expect(hazard(0, 7, boarding)).toBeLessThan(0.5 * hazard(11, 17, boarding));
  });

  it('lets bad days of the wards follow one another', () => {
    const byDay = new Map<string, number[]>();
    for (const { admissionDecisionAt, departureAt, areaId } of visits) {
      if (admissionDecisionAt === null || departureAt === null || areaId !== 'farrowmere-general-acute') continue;
      const date = localDate(zone.toLocal(admissionDecisionAt));
      byDay.set(date, [...(byDay.get(date) ?? []), (departureAt - admissionDecisionAt) / 3600]);
    }
    const logs = [...byDay].sort(([a], [b]) => a.localeCompare(b)).map(([, stays]) => Math.log(meanOf(stays)));
    const mean = meanOf(logs);
    const at = (lag: number) =>
      logs.slice(lag).reduce((sum, value, i) => sum + (value - mean) * (logs[i] - mean), 0) / (logs.length - lag);
    // Independent days would give 0 ± 2/√365.
    expect(at(1) / at(0)).toBeGreaterThan(0.2);
  });

  it('loses more patients before treatment in busy hours', () => {
    const share = (rows: readonly DemoVisit[]) =>
      rows.filter(({ disposition }) => disposition === 'left before treatment').length / rows.length;
    const ambulatory = visits.filter(({ areaId }) => areaId === 'farrowmere-general-ambulatory');
    const atHours = (from: number, to: number) =>
      ambulatory.filter(({ arrivalAt }) => {
        const hour = Math.floor((zone.toLocal(arrivalAt) % 86_400) / 3600);
        return hour >= from && hour < to;
      });
    expect(share(atHours(10, 20))).toBeGreaterThan(2 * share(atHours(2, 8)));
  });

  it('fills the harbour town on the day of its fair', () => {
    const totals = dayTotals(small);
    const fair = small.filter(({ arrivalAt }) => localDate(zone.toLocal(arrivalAt)) === '2025-08-30').length;
    expect(fair).toBeGreaterThan(1.2 * meanOf(totals));
  });

  it('refuses a window that ends before it starts and a site it does not know', () => {
    expect(() => makeVisitLog({ site: general, from: 10, to: 10, seed: 1 })).toThrow(RangeError);
    expect(() => makeVisitLog({ site: { id: 'elsewhere', timeZone: 'UTC' }, from: 0, to: 9, seed: 1 })).toThrow(
      /elsewhere/,
    );
  });

  it('counts present, waiting and boarding as a walk round the department would', () => {
    const at = utc('2025-06-14T20:00:00Z');
    const ids = general.areas.map(({ id }) => id);
    const census = censusAt(visits, at, ids);
    const known = censusAt(makeVisitLog({ site: general, from: at - 5 * 86_400, to: at + 1, seed: demoSeed }), at, ids);
    expect(known).toEqual(census);
    expect(census.map(({ areaId }) => areaId)).toEqual(ids);
    for (const { present, waiting, boarding } of census) expect(waiting + boarding).toBeLessThanOrEqual(present);
    const acute = visits.filter(
      (visit) =>
        visit.areaId === 'farrowmere-general-acute' && visit.arrivalAt <= at && (visit.departureAt ?? Infinity) > at,
    );
    expect(census[1].present).toBe(acute.length);
    expect(census[1].boarding).toBe(
      acute.filter(({ admissionDecisionAt }) => (admissionDecisionAt ?? Infinity) <= at).length,
    );
    expect(census[1].boarding).toBeGreaterThan(0);
  });
});
