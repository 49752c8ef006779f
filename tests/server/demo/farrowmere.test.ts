import { describe, expect, it } from 'vitest';
import { makeDayFactor } from '../../../demo/day-factor.ts';
import { demoAccounts, generalId, saltbyId } from '../../../demo/farrowmere-accounts.ts';
import { calendarDays, fairDate, outages, publicHolidays } from '../../../demo/farrowmere-calendar.ts';
import { demoSeed, demoSites } from '../../../demo/farrowmere.ts';
import { makeVisitLog } from '../../../demo/make-visit-log.ts';
import { siteProcesses } from '../../../demo/visit-process.ts';
import { site as siteSchema } from '../../../shared/api/sites.ts';
import { hourOfWeek, localHourAt } from '../../../shared/domain/hour-of-week.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';

describe('Farrowmere', () => {
  it('is made of sites that the product takes as they are', () => {
    for (const site of demoSites)
      expect(siteSchema.parse(site)).toMatchObject({ id: site.id, groupName: 'Farrowmere' });
  });

  it('plans every area, never below its safe minimum nor above the spaces that exist', () => {
    for (const site of demoSites) {
      expect(site.plan.map(({ areaId }) => areaId)).toEqual(site.areas.map(({ id }) => id));
      for (const area of site.areas) {
        const halfHours = site.plan.find(({ areaId }) => areaId === area.id)?.halfHours ?? [];
        expect(halfHours).toHaveLength(336);
        expect(Math.min(...halfHours)).toBeGreaterThanOrEqual(area.safeMinimum);
        expect(Math.max(...halfHours)).toBeLessThanOrEqual(area.spaces);
      }
    }
  });

  it('has a process for every area and no other', () => {
    for (const site of demoSites) {
      expect(siteProcesses[site.id].areas.map(({ areaId }) => areaId)).toEqual(site.areas.map(({ id }) => id));
    }
  });

  it('gives an ordinary week something to decide: Acute at risk in the evening, the rest mostly comfortable', () => {
    const [general] = demoSites;
    const zone = makeZone(general.timeZone);
    const from = Date.parse('2025-01-01T00:00:00Z') / 1000;
    const hours = 365 * 24;
    const visits = makeVisitLog({ site: general, from, to: from + hours * 3600, seed: demoSeed });
    const shortShare = (areaId: string, counts: (hourOfDay: number) => boolean) => {
      const need = new Int32Array(hours);
      for (const visit of visits) {
        if (visit.areaId !== areaId) continue;
        const end = visit.departureAt === null ? hours : Math.ceil((visit.departureAt - from) / 3600);
        for (let hour = Math.ceil((visit.arrivalAt - from) / 3600); hour < Math.min(end, hours); hour += 1)
          need[hour] += 1;
      }
      const plan = general.plan.find((area) => area.areaId === areaId)?.halfHours ?? [];
      let short = 0;
      let all = 0;
      for (let hour = 72; hour < hours; hour += 1) {
        const week = hourOfWeek(localHourAt(zone, from + hour * 3600));
        if (!counts(week % 24)) continue;
        all += 1;
        if (need[hour] > plan[2 * week]) short += 1;
      }
      return short / all;
    };
    const acute = shortShare('farrowmere-general-acute', (hour) => hour >= 16 && hour < 23);
    expect(acute).toBeGreaterThan(0.15);
    expect(acute).toBeLessThan(0.5);
    for (const area of general.areas.filter(({ name }) => name !== 'Acute')) {
      const share = shortShare(area.id, () => true);
      expect(share).toBeGreaterThan(0.001);
      expect(share).toBeLessThan(0.1);
    }
  });

  it('has the accounts that were promised, with names and addresses of their own', () => {
    const roles = Object.fromEntries(
      demoAccounts.map((account) => [
        account.username,
        [...account.siteRoles.map(({ siteId, role }) => `${siteId}:${role}`), ...account.installationRoles],
      ]),
    );
    const both = (role: string) => [`${generalId}:${role}`, `${saltbyId}:${role}`];
    expect(roles).toEqual({
      charge: both('charge'),
      operations: both('operations'),
      operations2: both('operations'),
      steward: both('steward'),
      executive: both('executive'),
      charge2: [`${saltbyId}:charge`],
      admin: ['administrator'],
      nobody: [],
    });
    expect(new Set(demoAccounts.map(({ email }) => email)).size).toBe(demoAccounts.length);
    for (const { email } of demoAccounts) expect(email).toMatch(/@(farrowmere|saltby)\.example$/);
  });
});

describe('the calendar', () => {
  // Bank holidays in England and Wales 2025, from memory of the government's list.
  it('knows the public holidays of England', () => {
    expect([...publicHolidays(2025).keys()].sort()).toEqual([
      '2025-01-01',
      '2025-04-18',
      '2025-04-21',
      '2025-05-05',
      '2025-05-26',
      '2025-08-25',
      '2025-12-25',
      '2025-12-26',
    ]);
  });

  it('lists the days of a span in order, the fair among them', () => {
    expect(fairDate(2025)).toBe('2025-08-30');
    const days = calendarDays(saltbyId, '2025-08-25', '2025-08-30');
    expect(days.map(({ date, kind }) => [date, kind])).toEqual([
      ['2025-08-25', 'public holiday'],
      ['2025-08-30', 'local event'],
    ]);
    expect(days[1].statedEffect).toEqual([1.3, 1.7]);
  });

  it('has one outage a year, at one site', () => {
    const zone = makeZone('Europe/London');
    const from = Date.parse('2025-01-01T00:00:00Z') / 1000;
    const found = outages(generalId, zone, from, from + 365 * 86_400);
    expect(found).toEqual([
      { from: Date.parse('2025-03-12T00:30:00Z') / 1000, to: Date.parse('2025-03-12T08:00:00Z') / 1000 },
    ]);
    expect(outages(saltbyId, zone, from, from + 365 * 86_400)).toEqual([]);
  });
});

describe('makeDayFactor', () => {
  it('has mean 1, its stated variation and its stated memory', () => {
    const factor = makeDayFactor({ seed: 7, path: [1, 2], sd: 0.2, carry: 0.6 });
    const n = 20_000;
    const logs = Array.from({ length: n }, (_, day) => Math.log(factor(day)));
    const mean = logs.reduce((sum, value) => sum + value, 0) / n;
    const cov = (lag: number) =>
      logs.slice(lag).reduce((sum, value, i) => sum + (value - mean) * (logs[i] - mean), 0) / (n - lag);
    // Standard errors from Bartlett's formula: about 0.006 for the memory, under 1.5 % for the deviation.
    expect(Math.sqrt(cov(0))).toBeCloseTo(0.2, 1.9);
    expect(Math.abs(cov(1) / cov(0) - 0.6)).toBeLessThan(0.03);
    const level = Array.from({ length: n }, (_, day) => factor(day)).reduce((sum, value) => sum + value, 0) / n;
    expect(Math.abs(level - 1)).toBeLessThan(0.02);
  });

  it('depends on the day alone', () => {
    const options = { seed: 7, path: [1, 2], sd: 0.2, carry: 0.9 };
    const forward = makeDayFactor(options);
    forward(10);
    forward(11);
    expect(makeDayFactor(options)(12)).toBe(forward(12));
  });
});
