import { writeFileSync } from 'node:fs';
import { cpus } from 'node:os';
import { browserBenches } from './browser-upload.ts';
import { stopServed } from './demo-server.ts';
import { engineBenches } from './engine.ts';
import { firstLoadBenches } from './first-load.ts';
import { fitBenches } from './fit.ts';
import { growthBenches } from './growth.ts';
import { historyBenches } from './history.ts';
import { importBenches } from './import.ts';
import { isMet, type Bench, type Figure } from './measure.ts';
import { servedBenches } from './served.ts';
import { demoModel, now } from './site-log.ts';
import { speedTable } from './speed-lines.ts';
import { recordBenches } from './track-record.ts';
import { waitingBenches } from './waiting.ts';
import { whatIfBenches } from './what-if.ts';

/**
 * `npm run bench [-- --json OUT] [-- --only NAME]`: every figure with its spread, comparison and goal, then every speed that
 * is asked for. `--only` takes the benches whose names hold NAME (several: commas between).
 */
function option(name: string): string | undefined {
  const at = process.argv.indexOf(`--${name}`);
  return at < 0 ? undefined : process.argv[at + 1];
}

function format(value: number): string {
  return Math.abs(value) >= 100 ? value.toFixed(0) : value.toPrecision(3);
}

function describe(figure: Figure): string {
  const { name, value, unit, spread, better, goal, goalRatio, compare, ratio, runs } = figure;
  const beside = compare === null ? '' : `, ${compare.name} ${format(compare.value)} (× ${format(ratio ?? NaN)})`;
  const goals = [
    ...(goal === undefined ? [] : [format(goal)]),
    ...(goalRatio === undefined ? [] : [`× ${format(goalRatio)}`]),
  ];
  const met = isMet(figure);
  const verdict = met === null ? '' : `, goal ${goals.join(' and ')} ${met ? 'met' : 'SHORT'}`;
  return `${name}: ${format(value)} ${unit} [${format(spread[0])} – ${format(spread[1])}, ${String(runs)} runs, ${better} is better]${beside}${verdict}`;
}

/** What if in this process, on the demo site's models. */
function fittedWhatIf(): Bench[] {
  let model: Awaited<ReturnType<typeof demoModel>> | null = null;
  const known = () => {
    if (!model) throw new Error('the models are not fitted yet');
    return model;
  };
  return whatIfBenches(known, now).map(({ name, run }) => ({
    name,
    run: async () => {
      model = await demoModel();
      return run();
    },
  }));
}

// What the built server does comes last, so that nothing of it runs beside what is measured in this process; history
// copies the demo's data before a million rows are loaded into it.
const benches: Bench[] = [
  ...engineBenches,
  ...waitingBenches,
  ...fittedWhatIf(),
  ...fitBenches,
  ...growthBenches,
  ...firstLoadBenches,
  ...servedBenches,
  ...historyBenches,
  ...recordBenches,
  ...importBenches,
  ...browserBenches,
];
const only = option('only')?.split(',');
const figures: Figure[] = [];
const print = (text: string) => process.stdout.write(`${text}\n`);
const began = performance.now();
print(`${String(cpus().length)} cores, ${cpus()[0]?.model ?? ''}, Node ${process.version}`);
try {
  for (const bench of benches) {
    if (only ? !only.some((part) => bench.name.includes(part)) : bench.onlyByName) continue;
    for (const figure of await bench.run()) {
      figures.push(figure);
      print(describe(figure));
    }
    if (bench === importBenches.at(-1)) await stopServed();
  }
} finally {
  await stopServed();
}
print(['', 'Speeds asked for:', ...speedTable(figures)].join('\n'));
print(`\nMeasured in ${((performance.now() - began) / 60_000).toFixed(1)} minutes.`);
const out = option('json');
if (out !== undefined) {
  const plain = figures.map(({ name, value, unit, better, compare, ratio, runs, spread }) => {
    return { name, value, unit, better, compare, ratio, runs, spread };
  });
  writeFileSync(out, `${JSON.stringify(plain, null, 2)}\n`);
}
