import { writeFileSync } from 'node:fs';
import { cpus } from 'node:os';
import { engineBenches } from './engine.ts';
import type { Figure } from './measure.ts';
import { servedBenches, stopServed } from './served.ts';

/** `npm run bench [-- --json OUT] [-- --only NAME]`: every figure with its spread, comparison and goal. */
function option(name: string): string | undefined {
  const at = process.argv.indexOf(`--${name}`);
  return at < 0 ? undefined : process.argv[at + 1];
}

function format(value: number): string {
  return value >= 100 ? value.toFixed(0) : value.toPrecision(3);
}

const only = option('only');
const figures: Figure[] = [];
const print = (text: string) => process.stdout.write(`${text}\n`);
print(`${String(cpus().length)} cores, ${cpus()[0]?.model ?? ''}, Node ${process.version}`);
for (const bench of [...engineBenches, ...servedBenches]) {
  if (only !== undefined && !bench.name.includes(only)) continue;
  for (const figure of await bench.run()) {
    figures.push(figure);
    const { name, value, unit, spread, better, goal, compare, ratio, runs } = figure;
    const met =
      goal === undefined
        ? ''
        : (better === 'lower' ? value <= goal : value >= goal)
          ? `, goal ${format(goal)} met`
          : `, goal ${format(goal)} SHORT`;
    const beside = compare === null ? '' : `, ${compare.name} ${format(compare.value)} (× ${format(ratio ?? NaN)})`;
    print(
      `${name}: ${format(value)} ${unit} [${format(spread[0])} – ${format(spread[1])}, ${String(runs)} runs, ${better} is better]${beside}${met}`,
    );
  }
}
await stopServed();
const out = option('json');
if (out !== undefined) writeFileSync(out, `${JSON.stringify(figures, null, 2)}\n`);
