import { describe, expect, it } from 'vitest';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { evaluateNeed, needLeads } from '../../../shared/forecasting/evaluate-need.ts';
import { histogramForecast } from '../../../shared/forecasting/histogram-forecast.ts';
import { presentByHour } from '../../../shared/forecasting/present-by-hour.ts';
import { expectWithin } from '../../support/closeness.ts';
import { simulateStayLog } from '../../support/simulate-stay-log.ts';

const zone = makeZone('Europe/London');
const from = Date.parse('2023-01-02T00:00Z') / 1000;
const days = 15 * 7;
const daily = (mean: number) => (hour: number) => mean * (1 + 0.5 * Math.sin((2 * Math.PI * (hour - 9)) / 24));
const { visits } = simulateStayLog({
  zone,
  from,
  days,
  areas: [
    { ratePerHour: daily(4), shares: [0.7, 0.25, 0.02, 0.03], hazard: [0.35, 0.15, 0.2, 0.5] },
    { ratePerHour: daily(2), shares: [0.9, 0.07, 0.01, 0.02], hazard: [0.5, 0.2, 0.3, 0.6] },
  ],
  hourFactor: () => 1,
  outflow: [
    { variance: 0, correlation: 0 },
    { variance: 0, correlation: 0 },
  ],
  stayShape: 1,
  seed: 3,
});

describe('need against the log’s own count', () => {
  const result = evaluateNeed({
    visits,
    areas: 2,
    zone,
    fromUtc: from,
    toUtc: from + days * 86_400,
    facts: { selectedBy: 'arrived', takenAt: from + days * 86_400, missingDeparture: 'still present' },
    calendar: [],
    weeks: 6,
    replications: 400,
  });

  it('is scored at every lead, without the days that the log’s end does not reach', () => {
    // Seven outlooks a week; the last three or four of the last week lack 72 h of log.
    expect(result.outlooks).toBeGreaterThanOrEqual(38);
    for (const lead of needLeads) {
      expect(result.need[`${lead}h`].n).toBe(result.outlooks);
      expect(result.needByArea[`${lead}h`].n).toBe(2 * result.outlooks);
    }
    expect(JSON.stringify(result)).not.toMatch(/NaN/);
  });

  it('is covered, and known better an hour ahead than a day ahead', () => {
    for (const lead of needLeads) {
      const { observed, expected } = result.needByArea[`${lead}h`].coverage['0.9'];
      // About 80 cases: 4 binomial standard errors are 0.13.
      expectWithin(observed ?? NaN, expected ?? NaN, 0.13, `${lead} h`);
    }
    expect(result.need['1h'].mae ?? NaN).toBeLessThan(result.need['24h'].mae ?? NaN);
    expect(result.shortfall.brier ?? NaN).toBeLessThan(0.25);
  });
});

describe('who was present', () => {
  it('is what counting every visit gives', () => {
    const present = presentByHour(visits, 2, 72);
    for (const hour of [100, 555, 1234]) {
      const at = from + hour * 3600 + 17;
      const counted = [0, 0];
      for (let i = 0; i < visits.length; i += 1) {
        if (visits.arrivalAt[i] <= at && visits.departureAt[i] > at && at - visits.arrivalAt[i] < 72 * 3600)
          counted[visits.area[i]] += 1;
      }
      expect(present.presentAt(at)).toEqual(counted);
      expect(present.censusAt(at).map((area) => area.present)).toEqual(counted);
    }
  });
});

describe('a histogram as a forecast', () => {
  it('adds up to one, keeps the mean, and holds nothing impossible', () => {
    const forecast = histogramForecast([0, 10, 50, 30, 10]);
    expectWithin(forecast.mean, 2.4, 1e-12, 'mean');
    expectWithin(forecast.cdf(200), 1, 1e-9, 'whole');
    expect(forecast.quantile(0.5)).toBe(2);
    expect(Number.isFinite(forecast.logProbability(12))).toBe(true);
    expect(() => histogramForecast([0, 0])).toThrow(/replication/);
  });
});
