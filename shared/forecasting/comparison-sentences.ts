import type { ModelComparison } from './compare-models.ts';
import type { ComparedScale, ScoreDifference } from './pair-scores.ts';
import { fitOf, leastScores } from './track-verdict.ts';

export interface ComparisonSentences {
  headline: string;
  arrivals: string;
  need: string;
  ranges: string;
  grounds: string;
}

type Verdict = 'better' | 'worse' | 'alike' | 'too few';

/** Whether a difference of scores is more than its own error explains: two standard errors, those of weeks and simulation together. */
export function differenceVerdict(difference: ScoreDifference | null): Verdict {
  if (difference === null || difference.se === null) return 'too few';
  const error = Math.hypot(difference.se, difference.monteCarlo ?? 0);
  if (Math.abs(difference.value) <= 2 * error) return 'alike';
  return difference.value < 0 ? 'better' : 'worse';
}

const levelNames = {
  hour: 'arrivals by hour',
  shift: 'arrivals by shift',
  day: 'arrivals by day',
  week: 'arrivals by week',
};

const listed = (names: readonly string[]): string =>
  names.length < 2 ? names.join('') : `${names.slice(0, -1).join(', ')} and ${names[names.length - 1]}`;
const weeksOf = (weeks: number): string => (weeks === 1 ? 'week' : `${String(weeks)} weeks`);

/** A comparison in plain words. The candidate is never called better where chance explains the difference. */
export function comparisonSentences(comparison: ModelComparison): ComparisonSentences {
  const { weeks, weeksAlike } = comparison;
  const arrivals = comparison.arrivals.map((scale) => ({ name: levelNames[scale.level], scale }));
  const need = comparison.need.map((scale) => ({ name: `need ${String(scale.leadHours)} h ahead`, scale }));
  const grounds =
    weeksAlike === 0
      ? `Each was given only what it would have known before each of the last ${weeksOf(weeks)}.`
      : weeksAlike === weeks
        ? 'Both were fitted on the same visits by the same method, so that before each of these weeks they would have been the same model. Weeks that come after the fit of the one in use can tell them apart.'
        : `Each was given only what it would have known before each of the last ${weeksOf(weeks)}; before ${String(weeksAlike)} of them both would have been the same model.`;
  return {
    headline: headline(comparison, [...arrivals, ...need]),
    arrivals: partSentence('Arrivals', arrivals),
    need:
      need.length === 0 ? 'Need could not be scored: the log holds too few whole days.' : partSentence('Need', need),
    ranges: rangesSentence(comparison),
    grounds,
  };
}

interface Named {
  name: string;
  scale: ComparedScale;
}

function sorted(parts: readonly Named[]): Record<Verdict, string[]> {
  const found: Record<Verdict, string[]> = { better: [], worse: [], alike: [], 'too few': [] };
  for (const { name, scale } of parts) found[differenceVerdict(scale.difference?.logScore ?? null)].push(name);
  return found;
}

function headline({ weeks, weeksAlike }: ModelComparison, parts: readonly Named[]): string {
  const { better, worse, alike } = sorted(parts);
  if (weeksAlike === weeks) return 'No past week tells the candidate from the model in use.';
  if (better.length + worse.length + alike.length === 0) return 'Too few weeks to tell the two apart.';
  const last = `over the last ${weeksOf(weeks)}`;
  if (better.length === 0 && worse.length === 0)
    return `The candidate and the model in use did equally well ${last}, as far as chance lets one tell.`;
  if (worse.length === 0) return `The candidate did better ${last} at ${listed(better)}, and worse at nothing.`;
  if (better.length === 0) return `The candidate did worse ${last} at ${listed(worse)}, and better at nothing.`;
  return `The candidate did better ${last} at ${listed(better)}, but worse at ${listed(worse)}.`;
}

function partSentence(what: string, parts: readonly Named[]): string {
  const { better, worse, alike } = sorted(parts);
  if (alike.length === parts.length) return `${what}: nothing beyond chance tells the two apart.`;
  const said = [
    better.length > 0 ? `the candidate’s whole range was nearer for ${listed(better)}` : '',
    worse.length > 0 ? `the one in use was nearer for ${listed(worse)}` : '',
    alike.length > 0 ? `nothing beyond chance for ${listed(alike)}` : '',
  ].filter((text) => text !== '');
  return said.length === 0 ? `${what}: too few weeks to say more.` : `${what}: ${said.join('; ')}.`;
}

/** Coverage is judged where cases are many: hours of arrivals, and need twelve hours ahead. */
function rangesSentence({ arrivals, need }: ModelComparison): string {
  const judged = [
    { name: 'arrivals by hour', scale: arrivals.find(({ level }) => level === 'hour') },
    { name: 'need 12 h ahead', scale: need.find(({ leadHours }) => leadHours === 12) },
  ];
  const texts = judged.flatMap(({ name, scale }) => {
    if (!scale || scale.n < leastScores) return [];
    const words = (['candidate', 'inUse'] as const).map((side) => {
      const ninety = scale[side].coverage.find(({ level }) => level === 0.9);
      const { observed = null, expected = null, se = null } = ninety ?? {};
      const fit = fitOf(observed, expected, se, scale.n);
      if (observed === null || expected === null || fit === 'too few') return 'too few to say';
      const held = `${(100 * observed).toFixed(1)} % where ${(100 * expected).toFixed(1)} % were to be`;
      return fit === 'right' ? held : `${held} (too ${fit})`;
    });
    return [`${name}: candidate ${words[0]}, in use ${words[1]}`];
  });
  return texts.length === 0 ? 'Too few weeks to judge the ranges.' : `Within the 90 % range, ${texts.join('; ')}.`;
}
