import type { RecordSummary } from './score-sums.ts';

/** What the scores are of, in words: "needs 4 hours ahead". */
export interface VerdictSubject {
  /** Many of them. */
  many: string;
  /** What the shortfall chance was of: "hours" or "shifts"; null where no chance was issued. */
  chanceOf: string | null;
}

export interface VerdictPart {
  name: string;
  n: number;
  coverage90: number | null;
  expected90: number | null;
  se: number | null;
}

/** Scores that were told apart because somebody had acknowledged the risk ('yes'), and the others ('no'). */
interface AcknowledgedPart {
  key: string;
  n: number;
  meanChance: number | null;
  share: number | null;
}

export interface Verdict {
  headline: string;
  coverage: string;
  chances: string;
  accuracy: string;
  pit: string;
  parts: string;
  acknowledged: string;
}

/** Fewer than this say nothing. */
export const leastScores = 30;

type Fit = 'too few' | 'right' | 'narrow' | 'wide';

/** Whether an interval held what it should: two standard errors and one in a hundred are put down to chance. */
export function fitOf(observed: number | null, expected: number | null, se: number | null, n: number): Fit {
  if (observed === null || expected === null || se === null || n < leastScores) return 'too few';
  const gap = observed - expected;
  if (Math.abs(gap) <= Math.max(2 * se, 0.01)) return 'right';
  return gap < 0 ? 'narrow' : 'wide';
}

const degree = (gap: number): string => (Math.abs(gap) < 0.03 ? 'a little ' : Math.abs(gap) > 0.08 ? 'much ' : '');
const ofHundred = (share: number): string =>
  share > 0 && share < 0.005 ? 'under 1' : share < 1 && share >= 0.995 ? 'over 99' : (100 * share).toFixed(0);
const grouped = (n: number): string => String(n).replace(/\B(?=(\d{3})+$)/g, ',');

/** The verdict in plain words: each sentence says what a drawing means. */
export function trackVerdict(
  summary: RecordSummary,
  subject: VerdictSubject,
  parts: readonly VerdictPart[],
  acknowledged: readonly AcknowledgedPart[] = [],
): Verdict {
  const ninety = summary.coverage.find(({ level }) => level === 0.9);
  const [observed, expected] = [ninety?.observed ?? null, ninety?.expected ?? null];
  const fit = fitOf(observed, expected, ninety?.se ?? null, summary.n);
  const chances = chanceFit(summary);
  return {
    headline: headline(summary, subject, fit, (observed ?? 0) - (expected ?? 0), chances),
    coverage: coverageSentence(summary, subject, fit, observed, expected),
    chances: chanceSentence(summary, subject, chances),
    accuracy: accuracySentence(summary, subject),
    pit: pitSentence(summary),
    parts: partsSentence(parts),
    acknowledged: acknowledgedSentence(acknowledged, subject),
  };
}

type ChanceFit = 'none' | 'too few' | 'right' | 'too low' | 'too high';

function chanceFit({ calledFor }: RecordSummary): ChanceFit {
  const { n, meanChance, share, se } = calledFor;
  if (n === 0 || meanChance === null || share === null) return 'none';
  if (n < leastScores || se === null) return 'too few';
  if (Math.abs(share - meanChance) <= Math.max(2 * se, 0.01)) return 'right';
  return share > meanChance ? 'too low' : 'too high';
}

function headline(summary: RecordSummary, subject: VerdictSubject, fit: Fit, gap: number, chances: ChanceFit): string {
  if (summary.n < leastScores) {
    return summary.n === 0
      ? `No ${subject.many} are scored yet`
      : `Too few ${subject.many} are scored to judge them: ${grouped(summary.n)}`;
  }
  const ranges =
    summary.coverage[0]?.observed === null
      ? null
      : fit === 'too few'
        ? 'Two weeks of scores are needed before the ranges can be judged'
        : fit === 'right'
          ? 'The ranges held what they promised'
          : fit === 'narrow'
            ? `The ranges were ${degree(gap)}too narrow`
            : `The ranges were ${degree(gap)}wider than they need be`;
  const said: Record<ChanceFit, string | null> = {
    none: null,
    'too few': null,
    right: 'shortfalls came as often as was said',
    'too low': 'shortfalls came more often than was said',
    'too high': 'shortfalls came less often than was said',
  };
  const second = said[chances];
  if (ranges === null) return second === null ? 'Too little is scored yet' : capital(second);
  if (second === null) return ranges;
  const agrees = (fit === 'right') === (chances === 'right');
  return `${ranges}${agrees ? ', and ' : ', but '}${second}`;
}

function capital(text: string): string {
  return text.charAt(0).toUpperCase() + text.slice(1);
}

function coverageSentence(
  summary: RecordSummary,
  subject: VerdictSubject,
  fit: Fit,
  observed: number | null,
  expected: number | null,
): string {
  if (observed === null || expected === null) return 'No ranges were issued for these; only a chance was.';
  const first = `Of ${grouped(summary.n)} ${subject.many}, ${ofHundred(observed)} in 100 lay within the 90 % range, which was to hold ${ofHundred(expected)} in 100 (counts are whole, so it holds a little more than 90).`;
  const meaning: Record<Fit, string> = {
    'too few': ' Too few weeks to say more.',
    right: ' That is as near as chance allows.',
    narrow:
      ' More fell outside than chance explains: leave more room than the range shows, and have the model fitted anew.',
    wide: ' Fewer fell outside than were to: the ranges ask for more beds than they need.',
  };
  return first + meaning[fit];
}

function chanceSentence({ calledFor }: RecordSummary, subject: VerdictSubject, fit: ChanceFit): string {
  if (fit === 'none' || subject.chanceOf === null) return 'No chance of shortfall was issued for these.';
  const first = `Over ${grouped(calledFor.n)} ${subject.chanceOf} a shortfall was given ${ofHundred(calledFor.meanChance ?? 0)} chances in 100 on average, and came in ${ofHundred(calledFor.share ?? 0)}.`;
  const meaning: Record<Exclude<ChanceFit, 'none'>, string> = {
    'too few': ' Too few to say more.',
    right: ' The chances can be taken as they stand.',
    'too low': ' Take the chances as somewhat higher than shown.',
    'too high': ' Take the chances as somewhat lower than shown; they are no reason to staff below the safe minimum.',
  };
  return first + meaning[fit];
}

function accuracySentence(summary: RecordSummary, subject: VerdictSubject): string {
  const { meanError, mase, floorMase, baselines } = summary;
  if (meanError === null) return 'No ranges were issued for these.';
  const first = `The middle of the range missed ${subject.many} by ${meanError.toFixed(1)} on average`;
  if (mase === null) return `${first}.`;
  const better = `${mase < 1 ? `${String(Math.round(100 * (1 - mase)))} % less` : `${String(Math.round(100 * (mase - 1)))} % more`} than taking the same time a week before`;
  const floor =
    floorMase === null || mase === 0
      ? ''
      : ` Chance alone would leave ${String(Math.round((100 * floorMase) / mase))} % of that, however good the forecast.`;
  const beaten = (Object.entries(baselines) as [keyof typeof baselines, (typeof baselines)['year']][]).filter(
    ([, { n, pinball, ownPinball }]) =>
      n >= leastScores && pinball !== null && ownPinball !== null && ownPinball > pinball,
  );
  const names = { lastWeek: 'last week’s figure', fourWeeks: 'the mean of four weeks', year: 'the mean of a year' };
  const loses =
    beaten.length === 0
      ? ''
      : ` By the whole range it did worse than ${beaten.map(([name]) => names[name]).join(' and ')}.`;
  return `${first}, ${better}.${floor}${loses}`;
}

function pitSentence({ pit, pitN }: RecordSummary): string {
  if (pitN < leastScores) return 'Too few for a picture.';
  const ends = (pit[0] + pit[pit.length - 1]) / 2;
  const half = pit.length / 2;
  const mean = (values: readonly number[]): number => values.reduce((sum, value) => sum + value, 0) / values.length;
  const [low, high] = [mean(pit.slice(0, half)), mean(pit.slice(half))];
  if (Math.abs(high - low) > 0.2) {
    return high > low
      ? 'The bars rise to the right: what came was more often in the upper part of the range than it should; forecasts were too low.'
      : 'The bars fall to the right: what came was more often in the lower part of the range than it should; forecasts were too high.';
  }
  if (ends > 1.3)
    return 'The outer bars are tall: what came fell at the ends of the range too often; ranges were too narrow.';
  if (ends < 0.7)
    return 'The outer bars are low: what came kept to the middle of the range; ranges were wider than needed.';
  return 'The bars are level: what came fell in every part of the range as often as it should.';
}

function partsSentence(parts: readonly VerdictPart[]): string {
  const judged = parts.filter((part) => fitOf(part.coverage90, part.expected90, part.se, part.n) !== 'too few');
  const gapOf = (part: VerdictPart): number => (part.coverage90 ?? 0) - (part.expected90 ?? 0);
  const worst = judged
    .filter((part) => fitOf(part.coverage90, part.expected90, part.se, part.n) === 'narrow')
    .sort((a, b) => gapOf(a) - gapOf(b))
    .at(0);
  if (judged.length === 0) return 'Too few to tell the parts apart.';
  if (!worst) return 'No lead, area, shift or model stands out: none had ranges that were too narrow.';
  return `Ranges were ${degree(gapOf(worst))}too narrow for ${worst.name}: ${ofHundred(worst.coverage90 ?? 0)} in 100 within the 90 % range, where ${ofHundred(worst.expected90 ?? 0)} were to be.`;
}

/** Who acknowledges does so because the risk has risen, and then does something: both move these cases, in opposite ways. */
function acknowledgedSentence(parts: readonly AcknowledgedPart[], { chanceOf }: VerdictSubject): string {
  if (chanceOf === null) return 'No chance of shortfall was issued for these, so none was acknowledged.';
  const [seen, open] = ['yes', 'no'].map((key) => parts.find((part) => part.key === key));
  if (!seen) return `Nobody acknowledged a risk in these ${chanceOf}.`;
  const said = ({ meanChance, share }: AcknowledgedPart): string =>
    `${ofHundred(meanChance ?? 0)} chances in 100 on average, and a shortfall came in ${ofHundred(share ?? 0)}`;
  const one = chanceOf.slice(0, -1);
  const first = `${grouped(seen.n)} ${seen.n === 1 ? one : chanceOf} with an acknowledged risk ${seen.n === 1 ? 'was' : 'were'} given ${said(seen)}`;
  const others = open ? `; the others ${said(open)}` : '';
  return `${first}${others}. A risk is acknowledged once it has risen, and what is then done may hold a shortfall off: the chances above leave these ${chanceOf} out, the ranges count them.`;
}
