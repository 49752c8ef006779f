import { describe, expect, it } from 'vitest';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { evaluateNeed, needLeads } from '../../../shared/forecasting/evaluate-need.ts';
import { expectWithin } from '../../support/closeness.ts';
import { simulateNeedLog } from '../../support/simulate-need-log.ts';
import type { NeedLogArea } from '../../support/simulate-need-log.ts';

// Source: the generator itself, whose law is stated in simulate-need-log.ts and which shares nothing with the engine but
// random numbers and the calendar; coverage against the intervals' exact mass (Gneiting, Balabdaoui & Raftery 2007).
// Three logs (seeds 1 to 3), so that no single run of slow days decides: of each 35 weeks are scored after 26 to learn from,
// an outlook a day at changing hours: some 730 outlooks, each at six leads. The standard error, by resampling whole weeks, is
// about 1 point pooled and 0.6 points per area.

const zone = makeZone('America/Toronto');
const from = Date.parse('2028-01-03T05:00Z') / 1000;
const trainingWeeks = 26;
const weeks = 35;
const days = (trainingWeeks + weeks) * 7 + 4;
const to = from + days * 86_400;

function weekOf(perDay: number, swing: number, byDay: readonly number[]): number[] {
  return Array.from({ length: 168 }, (_, hour) => {
    const ofDay = 1 + swing * Math.cos((2 * Math.PI * ((hour % 24) - 14)) / 24);
    return (perDay / 24) * ofDay * byDay[Math.floor(hour / 24)];
  });
}

function sharesOf(admitted: readonly number[], transferred: number, left: number): NeedLogArea['shares'] {
  return admitted.map((share) => [1 - share - transferred - left, share, transferred, left]);
}

const acute: NeedLogArea = {
  ratePerHour: weekOf(43, 0.55, [1.12, 1, 0.97, 0.97, 0.98, 0.97, 0.99]),
  shares: sharesOf([0.36, 0.34, 0.27, 0.26, 0.28, 0.32], 0.03, 0.03),
  meanStay: [3.6, 8, 5, 2],
  shape: [2, 2.2, 2, 1.5],
  boardingShape: 1.1,
};
const ambulatory: NeedLogArea = {
  ratePerHour: weekOf(32, 0.75, [1.02, 0.95, 0.94, 0.95, 0.98, 1.07, 1.09]),
  shares: sharesOf([0.06, 0.05, 0.04, 0.04, 0.04, 0.05], 0.01, 0.05),
  meanStay: [2.4, 6, 4, 1.8],
  shape: [1.8, 2.2, 2, 1.5],
  boardingShape: 1.1,
};

// Few departures at night, wards that take patients from late morning on and less at weekends.
const othersPace = [
  0.72, 0.66, 0.62, 0.6, 0.58, 0.6, 0.66, 0.78, 0.95, 1.06, 1.12, 1.14, 1.14, 1.14, 1.12, 1.1, 1.1, 1.1, 1.08, 1.06,
  1.04, 1, 0.92, 0.82,
];
const admittedPace = [
  0.5, 0.42, 0.38, 0.36, 0.36, 0.38, 0.42, 0.45, 0.5, 0.65, 0.95, 1.45, 1.75, 1.85, 1.8, 1.7, 1.6, 1.5, 1.35, 1.2, 1.05,
  0.9, 0.75, 0.6,
];

describe('need on a generated log with hourly outflow, an autoregressive outflow factor and stays that are not exponential', () => {
  const results = [1, 2, 3].map((seed) => {
    const visits = simulateNeedLog({
      zone,
      from,
      days,
      areas: [acute, ambulatory],
      pace: (admitted, hour, weekend) => (admitted ? admittedPace[hour] * (weekend ? 0.8 : 1) : othersPace[hour]),
      arrivalFactor: { variance: 0.004, correlation: 0.4 },
      outflow: [
        { variance: 0.01, correlation: 0.4 },
        { variance: 0.08, correlation: 0.6 },
      ],
      seed,
    });
    return evaluateNeed({
      visits,
      areas: 2,
      zone,
      fromUtc: from,
      toUtc: to,
      facts: { selectedBy: 'arrived', takenAt: to, missingDeparture: 'still present' },
      calendar: [],
      weeks,
      replications: 400,
    });
  });

  /** Coverage of the 90 % interval over all logs, which are equally long and independent. */
  function covered(scope: 'need' | 'needByArea', lead: (typeof needLeads)[number]) {
    const each = results.map((result) => result[scope][`${lead}h`].coverage['0.9']);
    const mean = (values: (number | null)[]): number =>
      values.reduce<number>((sum, value) => sum + (value ?? NaN), 0) / values.length;
    return {
      observed: mean(each.map(({ observed }) => observed)),
      expected: mean(each.map(({ expected }) => expected)),
      se: Math.hypot(...each.map(({ se }) => se ?? NaN)) / each.length,
    };
  }

  it('is scored often enough to tell', () => {
    expect(results.reduce((sum, { outlooks }) => sum + outlooks, 0)).toBeGreaterThanOrEqual(720);
    for (const lead of needLeads) {
      expect(covered('need', lead).se, `${lead} h, pooled`).toBeLessThan(0.015);
      expect(covered('needByArea', lead).se, `${lead} h, areas`).toBeLessThan(0.01);
    }
  });

  for (const lead of needLeads) {
    it(`the 90 % intervals ${lead} h ahead hold within 3 points of their exact mass, per area and pooled`, () => {
      for (const scope of ['needByArea', 'need'] as const) {
        const { observed, expected } = covered(scope, lead);
        expectWithin(observed, expected, 0.03, scope);
      }
    });
  }
});
