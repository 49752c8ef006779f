// @vitest-environment node
import { gunzipSync } from 'node:zlib';
import { expect, test } from 'vitest';
import { canonicalCountHeader } from '../../../../shared/domain/canonical-count.ts';
import { checkFile } from '../../../../src/features/visit-logs/check-file.ts';
import { asksCountOrder, countFaults, type CountMapping } from '../../../../src/features/visit-logs/count-mapping.ts';
import { offerMapping } from '../../../../src/features/visit-logs/mapping.ts';
import { surveyFile } from '../../../../src/features/visit-logs/survey-file.ts';

/** 2026-12-01T00:00:00Z */
const now = 1_796_083_200;
const areas = [
  { id: 'area-acute', name: 'Acute' },
  { id: 'area-minors', name: 'Minors' },
];

async function survey(csv: string) {
  const found = await surveyFile(new Blob([csv]), new Set(areas.map(({ name }) => name)), now, () => undefined);
  return { found, offered: offerMapping(found, areas) };
}

async function check(csv: string, more: Partial<CountMapping> = {}) {
  const { found, offered } = await survey(csv);
  if (!offered.counts) throw new Error('not offered as hourly counts');
  const settings = {
    survey: found,
    mapping: { ...offered, counts: { ...offered.counts, ...more } },
    areaIds: areas.map(({ id }) => id),
    areaNames: areas.map(({ name }) => name),
    timeZone: 'Europe/London',
    shiftEnds: [],
    covered: [],
    now,
  };
  const { outcome, payload } = await checkFile(new Blob([csv]), settings, () => undefined);
  const sent = payload === null ? null : gunzipSync(Buffer.from(await payload.arrayBuffer())).toString();
  return { outcome, sent };
}

const export1 = [
  'Date;Hour of day;Unit;No of attendances;Discharges;Triage nurse',
  '25/10/2026;00;ACUTE;4;3;x',
  '25/10/2026;01;ACUTE;2;1;x',
  '25/10/2026;01;ACUTE;1;5;y',
  '25/10/2026;00;minors;0;0;z',
  '25/10/2026;01;minors;7;2;z',
].join('\r\n');

test('an export of hourly counts is told by its columns, and sent in the product’s own form without any other column', async () => {
  const { outcome, sent } = await check(export1);
  expect(outcome.refused).toBeNull();
  // The hour that came twice stands in two rows: added, under its one label.
  expect(sent?.split('\n')).toEqual([
    canonicalCountHeader,
    'area-acute,2026-10-25,0,4,3',
    'area-acute,2026-10-25,1,3,6',
    'area-minors,2026-10-25,0,0,0',
    'area-minors,2026-10-25,1,7,2',
    '',
  ]);
  if (outcome.refused === null) {
    expect(outcome.counted?.areas).toEqual([
      { area: 0, arrivals: 7, departures: 9 },
      { area: 1, arrivals: 7, departures: 2 },
    ]);
  }
});

test('hours without a row refuse the file, unless the person says that nobody came', async () => {
  const gap = export1.replace('25/10/2026;00;minors;0;0;z\r\n', '');
  const { outcome, sent } = await check(gap);
  expect(sent).toBeNull();
  expect(outcome.refused).toEqual([
    {
      at: 'Minors',
      message:
        '1 of 2 hours have no row, the first: 2026-10-25 00:00. Write 0 where nobody came; what is not known belongs in no file.',
    },
  ]);
  const filled = await check(gap, { missing: 'none came' });
  expect(filled.sent).toContain('area-minors,2026-10-25,0,0,0');
  expect(filled.outcome).toMatchObject({ refused: null, counted: { filledHours: 1 } });
});

test('a date and hour in one column serve as both', async () => {
  const csv = ['period_date,care_area,arrivals', '2026-03-04 13:00,Acute,3', '2026-03-04 14:00,Acute,2'].join('\n');
  const { found } = await survey(csv);
  const columns = { care_area: 1, local_date: 0, hour: 0, arrivals: 2, departures: null };
  const counts: CountMapping = {
    columns,
    statedOrder: null,
    areas: { Acute: 'area-acute' },
    missing: 'not known',
  };
  expect(countFaults(found, counts)).toEqual([]);
  const mapping = { ...offerMapping(found, areas), counts };
  const { payload } = await checkFile(
    new Blob([csv]),
    { survey: found, mapping, areaIds: ['area-acute'], timeZone: 'Europe/London', shiftEnds: [], covered: [], now },
    () => undefined,
  );
  const sent = gunzipSync(Buffer.from(await payload!.arrayBuffer())).toString();
  expect(sent).toContain('area-acute,2026-03-04,13,3,');
  expect(sent).toContain('area-acute,2026-03-04,14,2,');
});

test('dates that could be read in either order are asked about, and what is missing is said', async () => {
  const csv = ['date,hour,area,arrivals', '03/04/2026,0,Acute,1', '03/04/2026,1,Annexe,1'].join('\n');
  const { found, offered } = await survey(csv);
  expect(asksCountOrder(found, offered.counts!)).toBe(true);
  expect(countFaults(found, offered.counts!)).toEqual([
    'Say of each value of the care area column which area it means: hours cannot be left out.',
  ]);
  const { sent } = await check(csv, { areas: { Acute: 'area-acute', Annexe: 'area-acute' }, statedOrder: 'day first' });
  expect(sent).toContain('area-acute,2026-04-03,0,1,');
});

test('a log of visits is not taken for hourly counts, even with an hour beside its times', async () => {
  const csv = [
    'arrival,arrival hour,date,unit,arrived by ambulance',
    '2026-03-04 13:05,13,2026-03-04,Acute,yes',
    '2026-03-04 14:10,14,2026-03-04,Acute,no',
  ].join('\n');
  expect((await survey(csv)).offered.counts).toBeNull();
});

test('a column of dates of birth cannot be chosen for the date', async () => {
  const csv = ['care_area,local_date,hour,arrivals', 'Acute,2026-03-04,0,1', 'Acute,1950-02-01,1,1'].join('\n');
  const { found, offered } = await survey(csv);
  expect(offered.counts).toBeNull();
  expect(found.columns[1].identifier).toEqual({ kind: 'date of birth', from: 'values' });
});
