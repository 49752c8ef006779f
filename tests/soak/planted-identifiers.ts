import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import readVisitLog from '../../server/features/visit-logs/read-visit-log.worker.ts';
import { checkFile } from '../../src/features/visit-logs/check-file.ts';
import { offerMapping } from '../../src/features/visit-logs/mapping.ts';
import { surveyFile } from '../../src/features/visit-logs/survey-file.ts';
import { buildVisitCsv, visitLine } from '../support/build-visit-csv.ts';
import { plantedHeaders, plantedValues } from '../support/planted-identifiers.ts';
import type { Soak } from './soak.ts';

const rows = 100_000;
const now = 1_790_000_000;
const areas = [
  { id: 'area-acute', name: 'Acute', code: 0 },
  { id: 'area-resuscitation', name: 'Resuscitation', code: 1 },
];
const columns = ['arrival', 'departure', 'area', 'disposition', 'ambulance'] as const;

/** One row in 100,000 holds an identifier: it is refused by the browser's reader, and by the server's when sent past it; so is each header. */
export const plantedIdentifiers: Soak = {
  name: 'planted-identifiers',
  async run(print) {
    const clean = buildVisitCsv({ from: now - rows * 60 - 86_400, rows, everySeconds: 60 });
    const middle = clean.indexOf('\n', clean.length / 2) + 1;
    const plant = (line: string) => `${clean.slice(0, middle)}${line}\n${clean.slice(middle)}`;
    const folder = mkdtempSync(join(tmpdir(), 'shoalmark-planted-'));
    try {
      let tried = 0;
      for (const [kind, value] of plantedValues) {
        for (const column of columns) {
          const text = plant(visitLine({ arrival: now - 86_400, [column]: value }));
          const said = [await byServer(join(folder, 'sent.csv'), text), await byBrowser(text)];
          said.forEach((words, side) => {
            const where = `${['server', 'browser'][side]}: ${kind}, “${value}” as ${column}`;
            if (!words?.includes(kind)) throw new Error(`${where} was not refused (${String(words)})`);
            if (words.includes(value)) throw new Error(`${where} was repeated`);
          });
          tried += 1;
        }
        print(`${kind}: ${value.length} signs, in ${String(columns.length)} columns, refused on both sides`);
      }
      for (const [kind, header] of plantedHeaders) {
        const text = clean.replace(/^([^\n]*)\n/, `$1,${header}\n`).replace(/(?<=\n)([^\n]+)\n/, '$1,x\n');
        const said = await byServer(join(folder, 'sent.csv'), text);
        const survey = await surveyFile(new Blob([text]), new Set(), now, () => undefined);
        const found = survey.columns.at(-1)?.identifier;
        if (!said?.includes(kind)) throw new Error(`server: the header ${header} was not refused`);
        if (found?.kind !== kind || found.from !== 'header')
          throw new Error(`browser: the header ${header} is not barred`);
        tried += 1;
      }
      print(
        `${String(tried)} files of ${rows.toLocaleString('en')} rows, ${String(new Set(plantedValues.map(([kind]) => kind)).size)} kinds: every one refused by the browser and by the server`,
      );
    } finally {
      rmSync(folder, { recursive: true, force: true });
    }
  },
};

/** What the server's reader says of an identifier; null if it found none. */
async function byServer(file: string, text: string): Promise<string | null> {
  writeFileSync(file, text);
  const outcome = await readVisitLog({ file, now, areas, timeZone: 'Europe/London', port: null, study: null });
  return outcome.refused !== null && outcome.identifying ? JSON.stringify(outcome.refused) : null;
}

/** What the browser says of it: a column that is barred from being mapped, or a check that refuses the file. */
async function byBrowser(text: string): Promise<string | null> {
  const file = new Blob([text]);
  const survey = await surveyFile(file, new Set(areas.flatMap(({ id, name }) => [id, name])), now, () => undefined);
  const barred = survey.columns.find(({ isBarred }) => isBarred);
  if (barred) return JSON.stringify({ ...barred.identifier, values: barred.values });
  const settings = {
    survey,
    mapping: offerMapping(survey, areas),
    areaIds: areas.map(({ id }) => id),
    timeZone: 'UTC',
    shiftEnds: [],
    covered: [],
    now,
  };
  const { outcome, payload } = await checkFile(file, settings, () => undefined);
  return outcome.refused !== null && outcome.identifying && payload === null ? JSON.stringify(outcome.refused) : null;
}
