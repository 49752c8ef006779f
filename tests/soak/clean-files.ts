import { checkFile } from '../../src/features/visit-logs/check-file.ts';
import { mappingFaults, offerMapping, stateOrder } from '../../src/features/visit-logs/mapping.ts';
import { surveyFile } from '../../src/features/visit-logs/survey-file.ts';
import { makeCleanExport } from '../support/make-clean-export.ts';
import type { Soak } from './soak.ts';

/** 2026-12-01T00:00:00Z */
const now = 1_796_083_200;
const files = 10_000;
const mostRefused = 10;

/** Of 10,000 generated clean files at most 10 may be refused; each is listed with its cause. */
export const cleanFiles: Soak = {
  name: 'clean-files',
  async run(print) {
    let refused = 0;
    for (let seed = 1; seed <= files; seed += 1) {
      const { csv, areas, rows, dateOrder } = makeCleanExport(seed);
      const file = new Blob([csv]);
      const survey = await surveyFile(file, new Set(areas.map(({ name }) => name)), now, () => undefined);
      const mapping = stateOrder(survey, offerMapping(survey, areas), dateOrder);
      const faults = mappingFaults(survey, mapping);
      const settings = {
        survey,
        mapping,
        areaIds: areas.map(({ id }) => id),
        timeZone: 'UTC',
        shiftEnds: [],
        covered: [],
        now,
      };
      const { outcome } = await checkFile(file, settings, () => undefined);
      const cause =
        faults.length > 0
          ? faults.join(' ')
          : outcome.refused !== null
            ? outcome.refused.map(({ at, message }) => `${at}: ${message}`).join(' ')
            : outcome.report.goodRows < rows
              ? `${String(rows - outcome.report.goodRows)} of ${String(rows)} rows have a problem: ${outcome.report.problems.map(({ problem }) => problem).join(', ')}`
              : null;
      if (cause !== null) {
        refused += 1;
        print(`file ${String(seed)}: ${cause}`);
      }
      if (seed % 2000 === 0) print(`${String(seed)} files read`);
    }
    print(`${String(refused)} of ${files.toLocaleString('en')} clean files refused`);
    if (refused > mostRefused) throw new Error(`more than ${String(mostRefused)} clean files were refused`);
  },
};
