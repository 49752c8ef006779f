import { describe, expect, test } from 'vitest';
import { emptySums, summariseSums, type RecordSummary } from '../../../shared/forecasting/score-sums.ts';
import { fitOf, trackVerdict } from '../../../shared/forecasting/track-verdict.ts';

const subject = { many: 'needs 4 h ahead', chanceOf: 'hours' };
const empty = summariseSums([emptySums()]);

function summary(observed: number, share: number, more: Partial<RecordSummary> = {}): RecordSummary {
  return {
    ...empty,
    n: 1000,
    weeks: 20,
    meanError: 3,
    mase: 0.7,
    floorMase: 0.63,
    coverage: [0.5, 0.8, 0.9, 0.95].map((level) => ({
      level,
      observed: level === 0.9 ? observed : level,
      expected: level === 0.9 ? 0.92 : level,
      se: 0.01,
    })),
    pit: new Array<number>(10).fill(1),
    pitN: 1000,
    calledFor: { n: 1000, meanChance: 0.2, share, se: 0.012 },
    ...more,
  };
}

describe('the verdict', () => {
  test.each([
    [0.92, 0.2, 'The ranges held what they promised, and shortfalls came as often as was said'],
    [0.901, 0.2, 'The ranges held what they promised, and shortfalls came as often as was said'],
    [0.895, 0.2, 'The ranges were a little too narrow, but shortfalls came as often as was said'],
    [0.8, 0.3, 'The ranges were much too narrow, and shortfalls came more often than was said'],
    [0.97, 0.1, 'The ranges were wider than they need be, and shortfalls came less often than was said'],
  ])('held %s of 0.92, came %s of 0.2', (observed, share, headline) => {
    expect(trackVerdict(summary(observed, share), subject, []).headline).toBe(headline);
  });

  test('too few say so', () => {
    expect(trackVerdict(empty, subject, []).headline).toBe('No needs 4 h ahead are scored yet');
    const few = { ...summary(0.5, 0.9), n: 12 };
    expect(trackVerdict(few, subject, []).headline).toBe('Too few needs 4 h ahead are scored to judge them: 12');
  });

  test('tells how much is left to chance, and where a rule of the past did better', () => {
    const losing = { n: 500, mase: 0.6, pinball: 1, ownPinball: 1.2 };
    const said = trackVerdict(summary(0.92, 0.2, { baselines: { ...empty.baselines, year: losing } }), subject, []);
    expect(said.accuracy).toContain('30 % less than taking the same time a week before');
    expect(said.accuracy).toContain('Chance alone would leave 90 % of that');
    expect(said.accuracy).toContain('did worse than the mean of a year');
  });

  test('a chance that was too high is no reason to staff below the safe minimum', () => {
    expect(trackVerdict(summary(0.92, 0.1), subject, []).chances).toContain('safe minimum');
  });

  test('tells acknowledged risks apart, and does not call them a failure', () => {
    const open = { key: 'no', n: 800, meanChance: 0.12, share: 0.11 };
    const seen = { key: 'yes', n: 37, meanChance: 0.41, share: 0.52 };
    const said = trackVerdict(summary(0.92, 0.2), subject, [], [seen, open]).acknowledged;
    expect(said).toContain(
      '37 hours with an acknowledged risk were given 41 chances in 100 on average, and a shortfall came in 52; the others 12 chances in 100 on average, and a shortfall came in 11.',
    );
    expect(said).toContain('what is then done may hold a shortfall off');
    const one = trackVerdict(summary(0.92, 0.2), subject, [], [{ ...seen, n: 1 }]).acknowledged;
    expect(one).toContain('1 hour with an acknowledged risk was given 41');
    expect(trackVerdict(summary(0.92, 0.2), subject, []).acknowledged).toBe(
      'Nobody acknowledged a risk in these hours.',
    );
    expect(trackVerdict(empty, { many: 'daily arrivals', chanceOf: null }, []).acknowledged).toContain('No chance');
  });

  test('names the part whose ranges were worst', () => {
    const part = (name: string, coverage90: number) => ({ name, n: 400, coverage90, expected90: 0.92, se: 0.015 });
    expect(trackVerdict(summary(0.92, 0.2), subject, [part('Night', 0.84), part('Early', 0.87)]).parts).toContain(
      'too narrow for Night: 84 in 100',
    );
    expect(trackVerdict(summary(0.92, 0.2), subject, [part('Night', 0.91)]).parts).toContain('stands out');
  });

  test.each([
    [[2, 1, 1, 1, 1, 1, 1, 1, 1, 2], 'too narrow'],
    [[0.4, 1, 1, 1, 1, 1, 1, 1, 1, 0.4], 'wider'],
    [[0.5, 0.6, 0.7, 0.8, 0.9, 1.1, 1.2, 1.3, 1.4, 1.5], 'too low'],
    [[1, 1, 1, 1, 1, 1, 1, 1, 1, 1], 'level'],
  ])('reads the PIT: %j', (pit, words) => {
    expect(trackVerdict(summary(0.92, 0.2, { pit }), subject, []).pit).toContain(words);
  });

  test('a gap within two standard errors, or one in a hundred, is chance', () => {
    expect(fitOf(0.9, 0.92, 0.011, 500)).toBe('right');
    expect(fitOf(0.905, 0.912, 0.001, 500)).toBe('right');
    expect(fitOf(0.89, 0.92, 0.011, 500)).toBe('narrow');
    expect(fitOf(0.89, 0.92, null, 500)).toBe('too few');
  });
});
