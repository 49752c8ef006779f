import { describe, expect, it } from 'vitest';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { fitStays } from '../../../shared/forecasting/fit-stays.ts';
import { blockHazards, streamsPerArea } from '../../../shared/forecasting/stay-model.ts';
import type { StayModel } from '../../../shared/forecasting/stay-model.ts';
import { hazardAt, stayAt } from '../../../shared/forecasting/stay-shape.ts';
import type { ExtractFacts, VisitTable } from '../../../shared/forecasting/visit-table.ts';
import { gammaExceedance } from '../../../shared/stochastic/gamma.ts';
import reference from '../../reference/censored-exponential.json' with { type: 'json' };
import { expectRelative, expectWithin } from '../../support/closeness.ts';
import { simulateStayLog } from '../../support/simulate-stay-log.ts';
import type { StayLogTruth } from '../../support/simulate-stay-log.ts';

const zone = makeZone('Europe/Helsinki');
const from = Date.UTC(2030, 0, 7) / 1000 - 7200;
const day = 86_400;
const facts: ExtractFacts = { selectedBy: 'arrived', takenAt: from + 1000 * day, missingDeparture: 'still present' };

function table(rows: [arrival: number, departure: number, disposition?: number][]): VisitTable {
  const length = rows.length;
  return {
    length,
    area: new Uint8Array(length),
    arrivalAt: Float64Array.from(rows, ([arrival]) => arrival),
    bedSpaceAt: new Float64Array(length).fill(NaN),
    admissionDecisionAt: new Float64Array(length).fill(NaN),
    departureAt: Float64Array.from(rows, ([, departure]) => departure),
    disposition: Uint8Array.from(rows, ([, , disposition]) => disposition ?? 0),
    byAmbulance: new Uint8Array(length).fill(255),
  };
}

function fit(visits: VisitTable, days: number, more: Partial<Parameters<typeof fitStays>[0]> = {}): StayModel {
  return fitStays({ visits, areas: 1, zone, window: { from, to: from + days * day }, facts, ...more });
}

describe('fitStays: hazards by maximum likelihood', () => {
  // Source: 6-MP arm of Gehan (1965), weeks read as hours; rate and limits from SciPy and R in censored-exponential.json.
  it('gives the rate and χ² limits of Gehan’s censored remissions, censored by the cap', () => {
    const times = reference.gehan6MP;
    const expected = reference.fits.gehan6MP;
    // A stay censored at t is one that outlasts a cap of t: one fit for each cap, its time at risk and departures added up.
    let departures = 0;
    let hoursAtRisk = 0;
    for (const [time, event] of times) {
      const visits = table([[from, from + (event === 1 ? time : time + 1) * 3600]]);
      const model = fit(visits, 200, { capHours: time });
      departures += model.streams[0].departures;
      hoursAtRisk += model.streams[0].hoursAtRisk;
    }
    expect(departures).toBe(expected.events);
    expectRelative(departures / hoursAtRisk, expected.rate, 1e-12, 'rate');
    const length = Math.max(...times.map(([time]) => time));
    const all = table(times.map(([time], i) => [from + i * 3600, from + (i + time) * 3600]));
    const { limits, departuresPerHour } = fit(all, 200, { capHours: length }).streams[0];
    expectRelative(departuresPerHour ?? NaN, times.length / 359, 1e-12, 'uncensored rate');
    expect(limits?.[0]).toBeLessThan(departuresPerHour ?? NaN);
    expect(limits?.[1]).toBeGreaterThan(departuresPerHour ?? NaN);
  });

  it('censors at the cap and reports the share', () => {
    const visits = table([
      [from, from + 3600],
      [from, from + 100 * 3600],
      [from, from + 3 * 3600],
      [from, NaN],
    ]);
    const model = fit(visits, 60);
    expect(model.streams[0].departures).toBe(2);
    expectWithin(model.streams[0].hoursAtRisk, 1 + 3 + 72 + 72, 0.01, 'hours at risk');
    expect(model.overCapShare).toBeCloseTo(0.5, 10);
  });

  it('takes only arrivals older than the cap, so that recent short stays do not crowd out long ones', () => {
    const takenAt = from + 30 * day;
    const recent = table([
      [from + day, from + day + 7200],
      [takenAt - 10 * 3600, takenAt - 9 * 3600],
    ]);
    const model = fit(recent, 30, { facts: { ...facts, takenAt } });
    expect(model.streams[0].visits).toBe(1);
    expect(model.leftOut.outsideWindow).toBe(1);
    // Selected by departure, the extract's own end is what cuts stays short.
    const departed = fit(recent, 30, { facts: { ...facts, selectedBy: 'departed', takenAt: takenAt + 30 * day } });
    expect(departed.usedTo).toBe(from + 27 * day);
    const arrived = fit(recent, 30, { facts: { ...facts, takenAt: takenAt + 30 * day } });
    expect(arrived.usedTo).toBe(takenAt);
  });

  it('counts what it leaves out, by reason', () => {
    const model = fit(
      table([
        [from, from - 60],
        [from, from + 31 * day],
        [from, from + 3600, 255],
        [from - 60, from + 3600],
        [from + 10 * day, from + 10 * day + 60],
        [from, from + 7200],
      ]),
      60,
      { gaps: [{ area: null, from: from + 12 * day, to: from + 13 * day }] },
    );
    expect(model.leftOut).toEqual({
      endsBeforeStart: 1,
      over30Days: 1,
      dispositionUnknown: 1,
      outsideWindow: 1,
      inGap: 1,
      departureUnknown: 0,
    });
    expect(model.streams[0].visits).toBe(1);
  });

  it('answers on the edges: one visit, stays of 0, one week, an area without visits', () => {
    const one = fit(table([[from, from + 3600]]), 60);
    for (const stream of one.streams) {
      for (const hazard of blockHazards(stream)) {
        expect(hazard).toBeGreaterThan(0);
        expect(hazard).toBeLessThan(Infinity);
      }
    }
    const zero = fit(table([[from, from]]), 60);
    expect(blockHazards(zero.streams[0]).every((hazard) => hazard > 0 && hazard <= 60)).toBe(true);
    const week = fit(table([[from, from + 3600]]), 7);
    expect(week.capHours).toBe(42);
    expect(week.cautions.join(' ')).toMatch(/short/);
    const two = fit(table([[from, from + 3600]]), 60, { areas: 2 });
    expect(two.streams[streamsPerArea].departuresPerHour).toBeNull();
    expectRelative(blockHazards(two.streams[streamsPerArea])[0], 1, 0.02, 'borrowed from the site');
    expect(JSON.parse(JSON.stringify(two))).toEqual(two);
  });

  it('refuses bad input by name', () => {
    const visits = table([[from, from + 3600]]);
    expect(() => fit(visits, 0)).toThrow(/window/);
    expect(() => fit(visits, 60, { capHours: 0 })).toThrow(/capHours/);
    expect(() => fit(visits, 60, { blockHours: 5 })).toThrow(/blockHours/);
    expect(() => fit(visits, 60, { areas: 0 })).toThrow(/areas/);
    expect(() => fit(visits, 60, { facts: { ...facts, takenAt: NaN } })).toThrow(/takenAt/);
    expect(() => fit(table([]), 60)).toThrow(/no visit/);
  });
});

const truth: StayLogTruth = {
  zone,
  from,
  days: 420,
  areas: [
    { ratePerHour: (h) => (h < 8 ? 2 : 6), shares: [0.6, 0.28, 0.05, 0.07], hazard: [0.3, 0.14, 0.2, 0.45] },
    { ratePerHour: (h) => (h < 8 ? 1 : 4), shares: [0.7, 0.2, 0.03, 0.07], hazard: [0.4, 0.1, 0.25, 0.5] },
  ],
  hourFactor: (h, weekend) => (h < 6 ? 0.6 : 1.2) * (weekend ? 0.85 : 1),
  outflow: [
    { variance: 0.02, correlation: 0.5 },
    { variance: 0.06, correlation: 0.6 },
  ],
  stayShape: 1,
  seed: 1,
};

describe('fitStays: recovery from simulated logs (seeds 1 to 8)', () => {
  // A log's mean hazard is μ times the mean of the factors its own days drew.
  const meanFactors: [others: number, admitted: number][] = [];
  const models = Array.from({ length: 8 }, (_, i) => {
    const { visits, factors } = simulateStayLog({ ...truth, seed: i + 1 });
    const [others, admitted] = factors.map(
      (factor) => factor.subarray(0, truth.days).reduce((sum, value) => sum + value, 0) / truth.days,
    );
    meanFactors.push([others, admitted]);
    return fit(visits, truth.days, { areas: 2, facts: { ...facts, takenAt: from + (truth.days + 30) * day } });
  });

  function meanOf(values: number[]): { mean: number; se: number } {
    const mean = values.reduce((a, b) => a + b, 0) / values.length;
    const variance = values.reduce((sum, value) => sum + (value - mean) ** 2, 0) / (values.length - 1);
    return { mean, se: Math.sqrt(variance / values.length) };
  }

  /** Bias over the eight logs within 2 standard errors of their mean. */
  function expectUnbiased(values: number[], expected: number, label: string): void {
    const { mean, se } = meanOf(values);
    expect(Math.abs(mean - expected), `${label}: ${mean} for ${expected}, SE ${se}`).toBeLessThanOrEqual(2 * se);
  }

  it('the hazard μ·g of 24 blocks within 2 SE and what shrinkage may cost, and the mean hazard within 2 SE', () => {
    for (const [index, hazard] of [
      [0, 0.3],
      [1, 0.14],
    ]) {
      const expected = (block: number): number => hazard * truth.hourFactor((block % 12) * 2, block >= 12);
      for (let block = 0; block < 24; block += 1) {
        const values = models.map((model) => blockHazards(model.streams[index])[block]);
        const { mean, se } = meanOf(values);
        // A block is drawn towards its neighbours by design: up to 5 % where nights at weekends see few departures.
        const label = `stream ${index}, block ${block}`;
        expectWithin(mean, expected(block), 2 * se + 0.05 * expected(block), label);
      }
      expectUnbiased(
        models.map((model, i) => {
          const { blockHoursAtRisk } = model.streams[index];
          const hazards = blockHazards(model.streams[index]);
          const fitted = blockHoursAtRisk.reduce((sum, hours, block) => sum + hours * hazards[block], 0);
          const known = blockHoursAtRisk.reduce((sum, hours, block) => sum + hours * expected(block), 0);
          return fitted / (known * meanFactors[i][index]);
        }),
        1,
        `mean hazard of stream ${index}, fitted / true`,
      );
    }
  });

  it('the outflow factor’s variance and correlation, apart for admitted patients', () => {
    expectUnbiased(
      models.map((model) => model.outflow.others.variance),
      0.02,
      'variance, others',
    );
    expectUnbiased(
      models.map((model) => model.outflow.admitted.variance),
      0.06,
      'variance, admitted',
    );
    expectUnbiased(
      models.map((model) => model.outflow.others.correlation),
      0.5,
      'correlation, others',
    );
    expectUnbiased(
      models.map((model) => model.outflow.admitted.correlation),
      0.6,
      'correlation, admitted',
    );
  });

  it('finds no outflow variation where there is none', () => {
    const calm = simulateStayLog({
      ...truth,
      days: 200,
      outflow: [
        { variance: 0, correlation: 0 },
        { variance: 0, correlation: 0 },
      ],
    });
    const model = fit(calm.visits, 200, { areas: 2 });
    expect(model.outflow.others.variance).toBeLessThan(0.003);
    expect(model.outflow.admitted.variance).toBeLessThan(0.006);
  });

  // Source: the gamma law's survival in closed form.
  it('finds the shape of stays that are not exponential, and that exponential ones have none', () => {
    for (const stayShape of [1, 2.5]) {
      const { visits } = simulateStayLog({ ...truth, stayShape, days: 300, seed: 21 });
      const { shape } = fit(visits, 300, { areas: 2 }).streams[0];
      expect(shape).not.toBeNull();
      for (const stay of [0.3, 0.6, 1, 1.5, 2]) {
        const survival = Math.exp(-hazardAt(shape, stay));
        expectWithin(survival, gammaExceedance(stayShape * stay, stayShape), 0.02, `shape ${stayShape}, stay ${stay}`);
        expectRelative(stayAt(shape, hazardAt(shape, stay)), stay, 1e-9, 'inverse');
      }
    }
  });
});
