import { isMet, type Figure } from './measure.ts';

/** A speed that is asked of the product, with the figures that answer it. */
interface SpeedLine {
  of: string;
  line: string;
  /** Beginnings of the names of the figures. */
  figures: readonly string[];
  /** Where it is measured, if not by the bench. */
  elsewhere?: string;
}

/** Every line on speed that the product has to hold. */
const speedLines: readonly SpeedLine[] = [
  {
    of: 'numbers',
    line: 'waiting simulation, 5.5 million patients/s a core',
    figures: ['waiting simulation, M_t/M/60'],
  },
  { of: 'numbers', line: 'need simulation, 8 million patients/s a core', figures: ['need simulation, 5 areas'] },
  { of: 'numbers', line: 'exact need, 6 areas × 168 h, under 10 ms', figures: ['exact need,'] },
  {
    of: 'numbers',
    line: 'exact finite beds, under 200 ms; with the day factor 2 s',
    figures: ['exact finite beds'],
  },
  {
    of: 'numbers',
    line: 'fit of 450,000 visits under 5 s, no slower than R glm',
    figures: ['fit of three years, 450000'],
  },
  { of: 'numbers', line: 'backtest of 52 weeks under 60 s', figures: ['backtest of'] },
  {
    of: 'numbers',
    line: 'waiting simulation 100 × SimPy with equal outputs',
    figures: ['waiting simulation, the same by processor', 'waiting simulation beside SimPy'],
  },
  { of: 'numbers', line: 'the same rates as R glm and statsmodels', figures: ['rates by hour of week'] },
  {
    of: 'growth',
    line: 'simulation, fit and import at most linear (1.1)',
    figures: ['growth of need', 'growth of waiting', 'growth of fit', 'growth of check and import'],
  },
  {
    of: 'growth',
    line: 'reads flat in history',
    figures: ['growth of Tonight', 'growth of Week', 'growth of Logs', 'growth of Track'],
  },
  {
    of: 'logs',
    line: 'a million rows in under 15 s and at most 3 × sqlite3 .import',
    figures: ['import of 1,000,000 rows'],
  },
  { of: 'logs', line: 'in under 400 MB', figures: ['peak memory of check and import'] },
  {
    of: 'logs',
    line: 'other requests meanwhile under 100 ms (99th percentile)',
    figures: ['other requests meanwhile'],
  },
  {
    of: 'logs',
    line: 'upload in the browser: moving bar, working cancel',
    figures: ['browser: the bar', 'browser: cancel'],
  },
  {
    of: 'tonight',
    line: 'save → outlook, five nurses: median 0.5 s, 95th percentile 1 s',
    figures: ['census saved', 'five nurses'],
  },
  { of: 'tonight', line: 'five sites at once under 2.5 s', figures: ['five sites at once'] },
  {
    of: 'tonight',
    line: 'first view on a cold cache under 1.5 s, throttled tablet',
    figures: [],
    elsewhere: 'npm run audit',
  },
  { of: 'tonight', line: 'first-load scripts under 220 kB compressed', figures: ['first load,'] },
  { of: 'desk', line: 'a drag in What if under 32 ms', figures: ['What if: a drag', 'What if in the browser: a drag'] },
  { of: 'desk', line: 'week ahead, two years of history, under 100 ms', figures: ['Week ahead with'] },
  {
    of: 'track record',
    line: 'page with 5,000 outlooks under 200 ms',
    figures: ['Track record with'],
    elsewhere: 'npm run bench -- --only "track record"',
  },
  {
    of: 'trust',
    line: 'reads under 100 ms (99th percentile)',
    figures: ['Tonight read by the page', 'reads while twenty'],
  },
  {
    of: 'trust',
    line: '200 people for 60 s, reads under 100 ms; with ten times the data within 1.5 ×',
    figures: [],
    elsewhere: 'npm run test:soak -- --only load',
  },
];

const shown = (value: number) => (Math.abs(value) >= 100 ? value.toFixed(0) : value.toPrecision(3));

/**
 * A line each for all speeds that are asked for: pass, SHORT, or where it is measured. Of several figures the one that
 * is furthest from its goal is shown.
 */
export function speedTable(figures: readonly Figure[]): string[] {
  return speedLines.map(({ of, line, figures: names, elsewhere }) => {
    const found = figures.filter(({ name }) => names.some((beginning) => name.startsWith(beginning)));
    const judged = found.filter((figure) => isMet(figure) !== null);
    const short = judged.filter((figure) => isMet(figure) === false);
    const verdict = judged.length === 0 ? '----' : short.length > 0 ? 'SHORT' : 'pass';
    const what =
      judged.length === 0
        ? `not in this run${elsewhere === undefined ? '' : `; ${elsewhere}`}`
        : describe(short.length > 0 ? short : judged);
    return `${verdict.padEnd(5)}  ${of.padEnd(12)}  ${line.padEnd(72)}  ${what}`;
  });
}

function describe(figures: readonly Figure[]): string {
  return [...figures]
    .sort((a, b) => strain(b) - strain(a))
    .slice(0, 2)
    .map(({ value, unit, ratio }) => `${shown(value)} ${unit}${ratio === null ? '' : ` (× ${shown(ratio)})`}`)
    .join('; ');
}

/** How much of its goal a figure uses up; above 1 is short. */
function strain({ value, goal, goalRatio, ratio, better }: Figure): number {
  const own = goal === undefined ? 0 : better === 'lower' ? value / goal : goal / value;
  const beside = goalRatio === undefined || ratio === null ? 0 : goalRatio / ratio;
  return Math.max(own, beside);
}
