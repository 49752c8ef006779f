// @vitest-environment node
import { expect, test } from 'vitest';
import { checkFile } from '../../../../src/features/visit-logs/check-file.ts';
import { mappingFaults, offerMapping, stateOrder } from '../../../../src/features/visit-logs/mapping.ts';
import { surveyFile } from '../../../../src/features/visit-logs/survey-file.ts';
import { makeCleanExport } from '../../../support/make-clean-export.ts';

/** 2026-12-01T00:00:00Z */
const now = 1_796_083_200;

test('of 500 generated clean files none is refused, none needs more than the answer about day and month, and every row is good', async () => {
  for (let seed = 1; seed <= 500; seed += 1) {
    const { csv, areas, rows, dateOrder } = makeCleanExport(seed);
    const file = new Blob([csv]);
    const survey = await surveyFile(file, new Set(areas.map(({ name }) => name)), now, () => undefined);
    const mapping = stateOrder(survey, offerMapping(survey, areas), dateOrder);
    expect(mappingFaults(survey, mapping), `seed ${String(seed)}`).toEqual([]);
    // UTC, so that no time falls into a clock change.
    const settings = {
      survey,
      mapping,
      shiftEnds: [],
      covered: [],
      areaIds: areas.map(({ id }) => id),
      timeZone: 'UTC',
      now,
    };
    const { outcome } = await checkFile(file, settings, () => undefined);
    expect(outcome, `seed ${String(seed)}`).toMatchObject({ refused: null, report: { rows, goodRows: rows } });
  }
});
