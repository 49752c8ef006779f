import { execFile } from 'node:child_process';
import { mkdtemp, readFile, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { promisify } from 'node:util';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { readHourlyCsv } from '../../server/cli/read-hourly-csv.ts';
import { readVisitCsv } from '../../server/cli/read-visit-csv.ts';
import { localDate, makeZone } from '../../shared/domain/zoned-time.ts';
import { simulateArrivals } from '../support/simulate-arrivals.ts';

const run = promisify(execFile);
const evaluate = (...args: string[]) => run(process.execPath, ['--import', 'tsx', 'server/cli/evaluate.ts', ...args]);

let folder: string;
beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), 'evaluate-'));
});
afterAll(async () => {
  await rm(folder, { recursive: true });
});

async function write(name: string, text: string): Promise<string> {
  const file = join(folder, name);
  await writeFile(file, text);
  return file;
}

describe('npm run evaluate', () => {
  it('on hourly arrivals prints a table and writes the scores as JSON', async () => {
    const { counts } = simulateArrivals({ seed: 44, weeks: 20, perDay: [60], phi: 0.01 });
    const rows = Array.from(counts.counts[0], (n, i) => {
      const localHour = counts.firstLocalHour + i;
      return `${localDate(localHour * 3600)},${String(localHour % 24)},${String(n)}`;
    });
    const file = await write('hourly.csv', `local_date,hour,arrivals\n${rows.join('\n')}\n`);
    const out = join(folder, 'scores.json');
    const { stdout } = await evaluate(
      '--hourly',
      file,
      '--timezone',
      'Asia/Kolkata',
      '--country',
      'IN',
      '--weeks',
      '3',
      '--json',
      out,
    );
    expect(stdout).toMatch(/Arrivals by day/);
    const scores = JSON.parse(await readFile(out, 'utf8')) as {
      model: Record<string, Record<string, unknown>>;
      baselines: Record<string, Record<string, Record<string, unknown>>>;
      settings: Record<string, unknown>;
    };
    expect(Object.keys(scores.baselines)).toEqual(['sameHourLastWeek', 'fourWeekMean', 'yearMean', 'regression']);
    for (const level of ['hour', 'day', 'week']) {
      for (const of of [scores.model, ...Object.values(scores.baselines)]) {
        expect(Object.keys(of[level])).toEqual(['n', 'logScore', 'mae', 'mase', 'pinball', 'coverage']);
        expect(of[level].pinball).toHaveProperty(['0.1']);
        expect(of[level].coverage).toHaveProperty(['0.9', 'expected']);
        expect(of[level].coverage).toHaveProperty(['0.9', 'se']);
      }
    }
    expect(scores.model.hour.n).toBe(3 * 168);
    expect(scores.model.need).toBeUndefined();
    expect(scores.settings.country).toBe('IN');
  });

  it('says how it is used, and names what is wrong', async () => {
    const said = (code: number, stderr: RegExp) => ({ code, stderr: expect.stringMatching(stderr) as string });
    await Promise.all([
      expect(evaluate('--hourly', 'x.csv')).rejects.toMatchObject(said(2, /Usage/)),
      expect(evaluate('--hourly', join(folder, 'none.csv'), '--timezone', 'UTC')).rejects.toMatchObject(
        said(1, /none\.csv/),
      ),
      expect(evaluate('--hourly', 'x.csv', '--timezone', 'Nowhere')).rejects.toMatchObject(said(1, /Nowhere/)),
    ]);
  });
});

describe('reading files', () => {
  // Clock changes of 2024 from the IANA time zone database.
  const zone = makeZone('Europe/London');

  it('hourly: the skipped hour has no exposure, the repeated one two, and a missing row is a gap', async () => {
    const rows = ['2024-03-31', '2024-10-27'].flatMap((date) =>
      Array.from({ length: 24 }, (_, hour) => `${date},${String(hour)},3`),
    );
    const { counts, cautions } = await readHourlyCsv(
      await write('change.csv', `local_date,hour,arrivals\n${rows.join('\n')}\n`),
      zone,
    );
    expect([...counts.exposureHours.slice(0, 3)]).toEqual([1, 0, 1]);
    expect(counts.counts[0][1]).toBe(0);
    expect(counts.exposureHours[counts.exposureHours.length - 23]).toBe(2);
    expect(counts.exposureHours[30]).toBe(0);
    expect(cautions.join(' ')).toMatch(/3 arrivals lie in hours that Europe\/London skipped/);
    expect(cautions.join(' ')).toMatch(/hours have no row/);
  });

  it('hourly: faults are listed by line, and a missing column is named', async () => {
    const bad = await write('bad.csv', 'local_date,hour,arrivals\n2024-01-01,24,1\n2024-02-30,3,1\n2024-01-01,3,-1\n');
    await expect(readHourlyCsv(bad, zone)).rejects.toThrow(
      /line 2: hour "24"[\s\S]*line 3: local_date "2024-02-30"[\s\S]*line 4: arrivals "-1"/,
    );
    await expect(readHourlyCsv(await write('columns.csv', 'date,hour\n2024-01-01,1\n'), zone)).rejects.toThrow(
      /local_date, arrivals/,
    );
    await expect(readHourlyCsv(await write('empty.csv', ''), zone)).rejects.toThrow(RangeError);
  });

  it('visits: the product’s own form, areas as they come, faulty rows left out and counted', async () => {
    const file = await write(
      'visits.csv',
      [
        'arrival_at,bed_space_at,admission_decision_at,departure_at,care_area,disposition,arrived_by_ambulance',
        '2024-01-01T00:10:00Z,2024-01-01T00:20:00Z,,2024-01-01T03:00:00Z,Acute,home,no',
        '2024-01-01T01:10:00+01:00,,,,Children,,',
        '2024-01-01T02:00:00Z,,,2024-01-01T01:00:00Z,Acute,home,no',
      ].join('\n'),
    );
    const { visits, areas, cautions } = await readVisitCsv(file, Date.parse('2024-02-01T00:00Z') / 1000);
    expect(areas).toEqual(['Acute', 'Children']);
    expect([...visits.area]).toEqual([0, 1]);
    expect(visits.arrivalAt[1]).toBe(Date.parse('2024-01-01T00:10:00Z') / 1000);
    expect(visits.departureAt[1]).toBeNaN();
    expect(cautions.join(' ')).toMatch(/1 rows? with faults/);
    await expect(readVisitCsv(await write('names.csv', 'arrival_at,care_area,patient_name\n'), 0)).rejects.toThrow(
      /column 3/,
    );
  });
});
