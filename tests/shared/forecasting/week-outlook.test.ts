import { describe, expect, it } from 'vitest';
import { bedsAt } from '../../../shared/domain/bed-schedule.ts';
import { withOwnEnds } from '../../../shared/domain/in-charge-spans.ts';
import { issueOutlook } from '../../../shared/forecasting/issue-outlook.ts';
import { chanceAbove, histogramQuantile } from '../../../shared/forecasting/need-histogram.ts';
import {
  issueWeekOutlook,
  prepareWeek,
  simulateWeekPart,
  weekFromParts,
} from '../../../shared/forecasting/week-outlook.ts';
import { makeReplication } from '../../../shared/forecasting/simulate-need.ts';
import { buildOutlookModel, outlookZone } from '../../support/build-outlook-model.ts';
import { buildWeekInput } from '../../support/build-week-input.ts';
import { expectRelative, expectWithin } from '../../support/closeness.ts';

const model = buildOutlookModel();
const input = buildWeekInput();
const result = issueWeekOutlook(model, input);
const prepared = prepareWeek(model, input);
const hour = 3600;

describe('issueWeekOutlook', () => {
  it('gives the same digits again, from parts in any order, and from models and inputs that went through JSON', () => {
    const parts = [
      [400, 600],
      [0, 399],
      [399, 400],
    ].map(([from, to]) => simulateWeekPart(prepareWeek(model, input), from, to));
    expect(weekFromParts(prepareWeek(model, input), parts)).toEqual(result);
    const stored = JSON.parse(JSON.stringify({ model, input })) as { model: typeof model; input: typeof input };
    expect(issueWeekOutlook(stored.model, stored.input)).toEqual(result);
    const other = { ...input, seed: 100 };
    expect(simulateWeekPart(prepareWeek(model, other), 0, 600)).not.toEqual(simulateWeekPart(prepared, 0, 600));
    expect(JSON.parse(JSON.stringify(result))).toEqual(result);
  });

  it('speaks of the rest of today and fourteen whole days, and of every shift until the last has ended', () => {
    expect(result.days).toHaveLength(15);
    expect(result.days[0].from).toBe(input.issuedAt);
    for (const [d, day] of result.days.entries()) {
      expect(day.from).toBe(d === 0 ? input.issuedAt : result.days[d - 1].to);
      if (d > 0) expect(outlookZone.toLocal(day.from) % 86_400).toBe(0);
    }
    expect(result.days.at(-1)?.to).toBe(input.daysUntil);
    expect(result.arrivals.days.spans).toEqual(result.days);
    expect(result.arrivals.weeks.spans.map(({ name }) => name)).toEqual(['7 days', '14 days']);
    expect(result.shifts.at(-1)?.to).toBe(input.hours.at(-1));
    // The night under way is in the list of shifts, but its arrivals so far are not forecast.
    expect(result.shifts[0].from).toBeLessThan(input.issuedAt);
    expect(result.arrivals.shifts.spans).toHaveLength(result.shifts.length - 1);
  });

  it('agrees with Tonight’s outlook of the same input to Monte Carlo error, hour by hour and in the first whole shift', () => {
    const hours = input.hours.slice(0, 30);
    const shifts = input.shifts.filter(({ from }) => from < hours[29]);
    const tonight = issueOutlook(model, { ...input, hours, shifts, replications: 4000 });
    const week = issueWeekOutlook(model, buildWeekInput({ replications: 4000, seed: 7 }));
    tonight.areas.forEach((area, a) => {
      for (const h of [0, 5, 11, 23, 29]) {
        expectWithin(
          week.areas[a].need.mean[h],
          area.need.mean[h],
          0.05 * area.need.mean[h] + 0.15,
          `mean at hour ${h}`,
        );
        expectWithin(week.areas[a].shortfall[h], area.shortfall[h].chance, 0.05, `shortfall at hour ${h}`);
        expectWithin(week.areas[a].need.p90[h], area.need.p90[h], 1, `P90 at hour ${h}`);
      }
      expectWithin(week.areas[a].shifts[1].someTime, area.shifts[1].someTime.chance, 0.05, 'some time in the shift');
      expectWithin(
        week.areas[a].shifts[1].bedsForPlanningRisk,
        area.shifts[1].bedsForPlanningRisk,
        1,
        'beds for the planning risk',
      );
    });
  });

  it('has ascending percentiles and finite figures', () => {
    for (const { need } of [...result.areas, result.department.pooled]) {
      for (let h = 0; h < result.hours.length; h += 1) {
        const { p2_5, p5, p10, p25, p50, p75, p90, p95, p97_5 } = need;
        const row = [p2_5, p5, p10, p25, p50, p75, p90, p95, p97_5].map((column) => column[h]);
        expect([...row].sort((x, y) => x - y)).toEqual(row);
        expect(row.concat(need.mean[h]).every(Number.isFinite)).toBe(true);
      }
    }
  });
});

/** The same answers from the traces of the replications, counted in the plainest way. */
function byHand(a: number) {
  const { plan, weekDays } = prepared;
  const replicate = makeReplication(plan, {});
  const shiftPeaks = input.shifts.map((): number[] => []);
  const excesses = input.shifts.map((): number[] => []);
  const leaving = Array.from({ length: weekDays.count }, (): number[] => []);
  const coming = Array.from({ length: weekDays.count }, (): number[] => []);
  for (let replication = 0; replication < input.replications; replication += 1) {
    const { moves, admittedIn, admittedOut } = replicate(replication);
    let n = 0;
    const need = Array.from({ length: plan.bins }, (_, bin) => (n += moves[a * (plan.bins + 1) + bin]));
    input.shifts.forEach((_, s) => {
      const bins = need.slice(plan.shiftFrom[s], plan.shiftTo[s]);
      shiftPeaks[s].push(Math.max(0, ...bins));
      excesses[s].push(Math.max(0, ...bins.map((here, i) => here - plan.areas[a].beds[plan.shiftFrom[s] + i])));
    });
    const days = Array.from({ length: weekDays.count }, () => [0, 0]);
    input.hours.forEach((_, h) => {
      const day = weekDays.dayOfHour[h];
      if (day < 0) return;
      days[day][0] += admittedOut[a * (input.hours.length + 1) + 1 + h];
      days[day][1] += admittedIn[a * (input.hours.length + 1) + 1 + h];
    });
    days.forEach(([out, come], d) => {
      leaving[d].push(out);
      coming[d].push(come);
    });
  }
  return { shiftPeaks, excesses, leaving, coming };
}

function histogram(values: readonly number[]): number[] {
  const counts = new Array<number>(Math.max(...values) + 1).fill(0);
  for (const value of values) counts[value] += 1;
  return counts;
}

describe('a shift’s own half hours', () => {
  it('beds of the incoming shift at handover are not those of the outgoing one, and a shift that only hands over keeps its end', () => {
    // Nights end at 08:00, days begin at 07:30: 30 beds from then on are the day's.
    const areas = input.areas.map((area, a) =>
      a === 0
        ? {
            ...area,
            staffedBeds: area.staffedBeds.map(({ at, beds }) => ({
              at: beds === 22 ? at - hour / 2 : at,
              beds: beds === 22 ? 30 : beds,
            })),
          }
        : area,
    );
    const own = issueWeekOutlook(model, { ...input, areas, replications: 40 });
    // After the last night no shift is known.
    own.shifts.slice(0, -1).forEach(({ name }, s) => {
      const { staffedLeast, staffedMost } = own.areas[0].shifts[s];
      expect([staffedLeast, staffedMost]).toEqual(name === 'Night' ? [18, 18] : [30, 30]);
    });
    const [night, day] = input.shifts;
    const [first] = withOwnEnds([night, day], night.from);
    expect(first).toEqual({ ...night, to: day.from });
    expect(withOwnEnds([night, day], day.from)[0]).toBe(night);
    expect(withOwnEnds([day], day.from)).toEqual([day]);
  });
});

describe('what is recorded', () => {
  const hand = byHand(0);
  const area = result.areas[0];

  it('is the highest need of each shift, the chance of any shortfall in it, and the beds that would do', () => {
    const replications = input.replications;
    area.shifts.forEach((shift, s) => {
      const peaks = histogram(hand.shiftPeaks[s]);
      expect(shift.peak.p90).toBe(histogramQuantile(peaks, 0.9));
      expect(shift.peak.p2_5).toBe(histogramQuantile(peaks, 0.025));
      expect(shift.someTime).toBe(hand.excesses[s].filter((over) => over > 0).length / replications);
      expect(shift.someTimeWithEverySpace).toBe(chanceAbove(peaks, input.areas[0].spaces).chance);
      const { bedStep, safeMinimum, spaces } = input.areas[0];
      const chanceWith = (added: number) => hand.excesses[s].filter((over) => over > added).length / replications;
      expect(shift.bedsToAdd % bedStep).toBe(0);
      expect(chanceWith(shift.bedsToAdd)).toBeLessThanOrEqual(input.planningRisk);
      expect(shift.staffedLeast + shift.bedsToAdd).toBeGreaterThanOrEqual(safeMinimum);
      if (shift.bedsToAdd > 0) expect(chanceWith(shift.bedsToAdd - bedStep)).toBeGreaterThan(input.planningRisk);
      expect(shift.bedsThatDoNotExist).toBe(
        Math.min(shift.bedsToAdd, Math.max(0, shift.staffedMost + shift.bedsToAdd - spaces)),
      );
      expect(shift.headroom).toBe(shift.staffedLeast - shift.peak.p90);
    });
  });

  it('is the sum of each day’s admissions, not a sum of percentiles', () => {
    result.days.forEach((_, d) => {
      const { admittedLeaving, arrivalsToAdmit } = area.admissions;
      for (const [columns, values] of [
        [admittedLeaving, hand.leaving[d]],
        [arrivalsToAdmit, hand.coming[d]],
      ] as const) {
        const counts = histogram(values);
        expect(columns.p50[d]).toBe(histogramQuantile(counts, 0.5));
        expect(columns.p97_5[d]).toBe(histogramQuantile(counts, 0.975));
        const mean = values.reduce((sum, value) => sum + value, 0) / values.length;
        expectWithin(columns.mean[d], mean, 0.001, `mean of day ${d}`);
      }
    });
  });

  it('keeps patients: over two weeks as many admitted leave as come, within the spread', () => {
    const { admittedLeaving, arrivalsToAdmit } = result.department.admissions;
    const sum = (values: readonly number[]) => values.slice(1).reduce((all, value) => all + value, 0);
    expectRelative(sum(admittedLeaving.mean), sum(arrivalsToAdmit.mean), 0.05, 'leaving and coming');
  });
});

describe('plan, lead times and safe minimum', () => {
  it('reads the planned beds of each shift at their fewest and most', () => {
    result.shifts.forEach((shift, s) => {
      const { staffedLeast, staffedMost } = result.areas[0].shifts[s];
      const steps = input.areas[0].staffedBeds;
      const from = Math.max(shift.from, input.issuedAt);
      const beds = Array.from({ length: Math.floor((shift.to - from) / 300) }, (_, i) =>
        bedsAt(steps, from + i * 300 + 299),
      );
      expect([staffedLeast, staffedMost], shift.name).toEqual([Math.min(...beds), Math.max(...beds)]);
    });
  });

  it('has the last chance to book by the longer of the shift’s lead time and the area’s notice', () => {
    const night = result.shifts.findIndex(({ name }, s) => s > 0 && name === 'Night');
    const day = result.shifts.findIndex(({ name }) => name === 'Day');
    expect(result.shifts[night].from - result.areas[0].shifts[night].lastChanceAt).toBe(48 * hour);
    expect(result.shifts[night].from - result.areas[1].shifts[night].lastChanceAt).toBe(72 * hour);
    expect(result.shifts[day].from - result.areas[0].shifts[day].lastChanceAt).toBe(4 * hour);
  });

  it('counts nurse hours by the site’s own ratio, and none where the site has stated none', () => {
    result.areas[0].shifts.forEach(({ nurseHours, bedsToAdd }, s) => {
      const { from, to } = result.shifts[s];
      expect(nurseHours).toBeCloseTo((bedsToAdd * (to - Math.max(from, input.issuedAt))) / hour / 4, 9);
    });
    expect(result.areas[1].shifts.every(({ nurseHours }) => nurseHours === null)).toBe(true);
  });

  it('adds what a plan below the safe minimum lacks, however low the risk', () => {
    const low = input.areas.map((area) => ({ ...area, safeMinimum: 30, spaces: 40 }));
    const quiet = issueWeekOutlook(model, buildWeekInput({ areas: low, planningRisk: 0.5, replications: 100 }));
    for (const shift of quiet.areas[0].shifts) {
      expect(shift.staffedLeast + shift.bedsToAdd).toBeGreaterThanOrEqual(30);
      expect(shift.bedsToStaff).toBeGreaterThanOrEqual(30);
    }
  });

  it('more staffed beds never raise a chance, on the same seed', () => {
    const more = input.areas.map((area) => ({
      ...area,
      staffedBeds: area.staffedBeds.map((step) => ({ ...step, beds: step.beds + 2 })),
    }));
    const richer = issueWeekOutlook(model, buildWeekInput({ areas: more }));
    result.areas.forEach((area, a) => {
      area.shifts.forEach(({ someTime }, s) =>
        expect(richer.areas[a].shifts[s].someTime).toBeLessThanOrEqual(someTime),
      );
      area.shortfall.forEach((chance, h) => expect(richer.areas[a].shortfall[h]).toBeLessThanOrEqual(chance));
    });
  });
});

describe('calendar', () => {
  const date = '2031-04-05';
  const local = Date.UTC(2031, 3, 5) / 1000;
  const withDay = (statedEffect: [number, number] | null) =>
    issueWeekOutlook(
      model,
      buildWeekInput({
        calendar: [{ date, kind: 'local event', name: 'Lantern fair', statedEffect }],
        replications: 50,
      }),
    );

  it('a day entered after the fit moves the arrivals of its day and no other', () => {
    const fair = withDay([1.3, 1.5]);
    const place = result.days.findIndex(({ name }) => name === date);
    expect(place).toBeGreaterThan(0);
    const ratio = (d: number) => fair.arrivals.days.total.mean[d] / result.arrivals.days.total.mean[d];
    expectWithin(ratio(place), Math.sqrt(1.3 * 1.5), 0.03, 'the day’s arrivals');
    expectWithin(ratio(place - 1), 1, 0.01, 'the day before');
    expectWithin(ratio(place + 1), 1, 0.01, 'the day after');
  });

  it('a day taken out since the fit moves nothing any more, neither the week, nor Tonight, nor waits', () => {
    const fair = {
      date,
      kind: 'local event' as const,
      name: 'Lantern fair',
      statedEffect: [2, 2.2] as [number, number],
    };
    const known = { ...model, calendar: [fair], arrival: { ...model.arrival, calendar: [fair] } };
    const few = buildWeekInput({ calendar: [], replications: 20, waitLimitMinutes: 60 });
    const week = issueWeekOutlook(known, few);
    expect(week).toEqual(issueWeekOutlook(model, few));
    expect(week.calendar).toEqual([]);
    const hours = few.hours.slice(0, 36);
    const tonight = { ...few, hours, shifts: few.shifts.filter(({ from }) => from < hours[35]) };
    expect(issueOutlook(known, tonight)).toEqual(issueOutlook(model, tonight));
  });

  it('tells the effect as a range and on what ground it stands', () => {
    const [stated] = withDay([1.3, 1.5]).calendar;
    expect(stated).toMatchObject({ date, name: 'Lantern fair', basis: 'stated', pastDays: 0 });
    expect(outlookZone.toLocal(stated.from)).toBe(local);
    // A uniform law on the log scale from 1.3 to 1.5: its middle, and 90 % of a normal of the same spread about it.
    const sd = Math.log(1.5 / 1.3) / Math.sqrt(12);
    expectRelative(stated.effect, Math.sqrt(1.3 * 1.5), 1e-9, 'middle');
    expectRelative(stated.high, Math.sqrt(1.3 * 1.5) * Math.exp(1.6448536 * sd), 1e-6, 'upper end');
    const [unknown] = withDay(null).calendar;
    expect(unknown.basis).toBe('not known');
    expectRelative(unknown.effect, 1, 1e-9, 'an unknown effect is centred on none');
    expect(unknown.high / unknown.low).toBeGreaterThan(1.5);
  });

  it('an ordinary week leaves events out and has the level of the forecast', () => {
    const fair = withDay([3, 3.2]);
    expect(fair.ordinaryWeek).toEqual(result.ordinaryWeek);
    const whole = result.ordinaryWeek.reduce((sum, own) => sum + own.reduce((all, rate) => all + rate, 0), 0);
    expectRelative(whole, result.arrivals.weeks.total.mean[0], 0.03, 'a week’s arrivals');
    const busiest = result.ordinaryWeek[0].indexOf(Math.max(...result.ordinaryWeek[0]));
    expect(busiest % 24).toBeGreaterThanOrEqual(8);
  });
});

describe('what it refuses', () => {
  it('a coarse model: under eight weeks of visits nothing is forecast past a day', () => {
    expect(() => prepareWeek({ ...model, arrival: { ...model.arrival, coarse: true } }, input)).toThrow(/eight weeks/);
  });

  it('parts that leave a hole', () => {
    const parts = [simulateWeekPart(prepared, 0, 100), simulateWeekPart(prepared, 101, 600)];
    expect(() => weekFromParts(prepared, parts)).toThrow(/100\.\.101/);
    expect(() => weekFromParts(prepared, parts.slice(0, 1))).toThrow(/0\.\.100/);
  });
});
