import { badRequests } from './bad-requests.ts';
import { cleanFiles } from './clean-files.ts';
import { load } from './load.ts';
import { killImport } from './kill-import.ts';
import { killServer } from './kill-server.ts';
import { plantedIdentifiers } from './planted-identifiers.ts';
import { killBrief } from './kill-brief.ts';
import { driftWatch } from './drift-watch.ts';
import { recoverArrivals } from './recover-arrivals.ts';
import type { Soak } from './soak.ts';

const soaks: Soak[] = [
  badRequests,
  killServer,
  load,
  killBrief,
  recoverArrivals,
  plantedIdentifiers,
  cleanFiles,
  killImport,
  driftWatch,
];

/** `npm run test:soak [-- --only NAME]`: the tests that take minutes, one after the other. */
const only = process.argv.includes('--only') ? process.argv[process.argv.indexOf('--only') + 1] : undefined;
const chosen = soaks.filter(({ name }) => only === undefined || name === only);
if (chosen.length === 0) {
  throw new Error(`No long test is called ${String(only)}; there are: ${soaks.map(({ name }) => name).join(', ')}.`);
}
let failed = 0;
for (const soak of chosen) {
  const startedAt = performance.now();
  const print = (line: string) => process.stdout.write(`${soak.name}: ${line}\n`);
  try {
    await soak.run(print);
    print(`passed in ${((performance.now() - startedAt) / 1000).toFixed(0)} s`);
  } catch (error) {
    failed += 1;
    print(`FAILED: ${error instanceof Error ? error.message : String(error)}`);
  }
}
process.exitCode = failed === 0 ? 0 : 1;
