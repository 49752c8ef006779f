import { killImports } from '../support/kill-import.ts';
import type { Soak } from './soak.ts';

const rows = 200_000;
const kills = 60;

/** Sixty kills at random moments of an import of 200,000 rows: all of a log or none, and all of it after the next start. */
export const killImport: Soak = {
  name: 'kill-import',
  async run(print) {
    let none = 0;
    let all = 0;
    let inTheMiddle = 0;
    await killImports({ rows, kills, seed: 20 }, (one) => {
      const isAll = one.statusAfterKill === 'ready' && one.countedAfterKill === rows && one.storedAfterKill === rows;
      const isNone = one.statusAfterKill === 'loading' && one.countedAfterKill === 0;
      const mended =
        one.statusAfterStart === 'ready' &&
        one.countedAfterStart === rows &&
        one.storedAfterStart === rows &&
        one.left.length === 0;
      if ((!isAll && !isNone) || !mended) throw new Error(`a kill left neither all nor none: ${JSON.stringify(one)}`);
      if (isAll) all += 1;
      else none += 1;
      if (isNone && one.storedAfterKill > 0) inTheMiddle += 1;
    });
    print(
      `${String(kills)} kills: none of the log ${String(none)} times (rows half written ${String(inTheMiddle)} times), all of it ${String(all)} times`,
    );
    if (inTheMiddle === 0) throw new Error('no kill fell into the middle of the import');
  },
};
