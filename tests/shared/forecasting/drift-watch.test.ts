import { describe, expect, test } from 'vitest';
import { driftSentence } from '../../../shared/forecasting/drift-sentence.ts';
import { watchDrift, type WatchedScore } from '../../../shared/forecasting/drift-watch.ts';
import { studyDrift } from '../../support/drift-study.ts';
import { simulateSiteYear } from '../../support/simulate-site-year.ts';

/** PITs spread evenly, seven a week, in an order without trend. */
function evenWeeks(weeks: number, pitOf: (u: number) => number = (u) => u): WatchedScore[] {
  return Array.from({ length: weeks * 7 }, (_, i) => ({
    week: Math.floor(i / 7),
    // Multiples of the golden ratio fill the unit interval evenly (Weyl 1916).
    pit: pitOf((i * 0.618_033_988_75 + 0.5) % 1),
    observed: 100,
    median: 100,
  }));
}

describe('the watch', () => {
  test('finds nothing in scores that are as they should be', () => {
    const report = watchDrift([{ name: 'arrivals', scores: evenWeeks(52) }]);
    expect(report).toEqual({ weeks: 52, findings: [] });
  });

  test('says nothing of weeks with too few scores', () => {
    const few = evenWeeks(10).filter((_, i) => i % 7 < 3);
    expect(watchDrift([{ name: 'need', scores: few }])).toEqual({ weeks: 0, findings: [] });
  });

  test('finds counts above the forecast, dates them back to their start and says by how much', () => {
    const scores = evenWeeks(20, (u) => u).map((score) =>
      score.week < 10 ? score : { ...score, pit: 0.9 + score.pit / 10, observed: 112 },
    );
    const [finding] = watchDrift([{ name: 'arrivals', scores }]).findings;
    expect(finding).toMatchObject({ series: 'arrivals', kind: 'more than forecast', since: 10 });
    expect(finding.week).toBeLessThanOrEqual(11);
    expect(finding.ratio).toBeCloseTo(1.12, 10);
  });

  test('finds ranges that are too narrow: what comes lies at both ends', () => {
    const scores = evenWeeks(30, (u) => (u < 0.5 ? u / 5 : 1 - (1 - u) / 5));
    const kinds = watchDrift([{ name: 'need', scores }]).findings.map(({ kind }) => kind);
    expect(kinds).toContain('ranges too narrow');
  });

  test('gives no verdict after a single week', () => {
    const scores = evenWeeks(1, () => 0.9999);
    expect(watchDrift([{ name: 'arrivals', scores }]).findings).toEqual([]);
  });
});

test('a finding is said in words, with what to do', () => {
  expect(driftSentence({ series: 'arrivals', kind: 'more than forecast', ratio: 1.09 }, '2026-03-02')).toBe(
    'Arrivals have run 9 % above the forecast since the week of 2026-03-02, more than chance explains. Have the model fitted anew.',
  );
  expect(driftSentence({ series: 'need', kind: 'ranges too narrow', ratio: 1 }, '2026-03-02')).toContain('too narrow');
});

/*
 * A small version of tests/soak/drift-watch.ts; the truth is the simulation's own. Bounds are four standard errors of 150 runs
 * off what the long study found.
 */
describe('on simulated site-years of 260 visits a day', () => {
  const rates = studyDrift({ visitsPerDay: 260, daysPerLog: 1 }, 150, 42);

  test('at most about one false flag a year', () => {
    expect(rates.falsePerYear).toBeLessThan(1.2);
  });

  test('a change of level by 10 % is seen within three weeks', () => {
    expect(rates.shiftWithinThree).toBeGreaterThan(0.8);
  });

  test('intervals 20 % too narrow are seen within twelve', () => {
    expect(rates.narrowWithinTwelve).toBeGreaterThan(0.88);
  });

  test('forecasts of the simulation are right: their PITs are uniform', () => {
    // Kolmogorov–Smirnov at p = 0.001 would be 1.95/√n for independent ones; days of one factor are not, so twice that is allowed.
    const [arrivals] = simulateSiteYear({ visitsPerDay: 260, weeks: 104, daysPerLog: 1, seed: 5 });
    const pits = arrivals.scores.map(({ pit }) => pit).sort((a, b) => a - b);
    const gap = Math.max(...pits.map((pit, i) => Math.abs(pit - (i + 0.5) / pits.length)));
    expect(gap).toBeLessThan((2 * 1.95) / Math.sqrt(pits.length));
  });
});
