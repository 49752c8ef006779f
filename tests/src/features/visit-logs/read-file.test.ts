// @vitest-environment node
import { gzipSync, gunzipSync } from 'node:zlib';
import { describe, expect, test } from 'vitest';
import { canonicalHeader, canonicalPlaces, canonicalReading } from '../../../../shared/domain/canonical-visit.ts';
import { guessColumns } from '../../../../shared/domain/guess-columns.ts';
import { guessArea, guessAmbulance, guessDisposition } from '../../../../shared/domain/guess-value.ts';
import { VisitFileReader } from '../../../../shared/domain/visit-file.ts';
import { visitColumns, type VisitColumn } from '../../../../shared/domain/visit-row.ts';
import { checkFile, type FileMapping } from '../../../../src/features/visit-logs/check-file.ts';
import { makeRecordParser } from '../../../../src/features/visit-logs/parse-records.ts';
import { surveyFile, type FileSurvey } from '../../../../src/features/visit-logs/survey-file.ts';

/** 2026-12-01T00:00:00Z */
const now = 1_796_083_200;
const areas = [
  { id: 'area-acute', name: 'Acute' },
  { id: 'area-minors', name: 'Minors' },
];
const known = new Set(areas.flatMap(({ id, name }) => [id, name]));
const timeZone = 'Europe/London';

const blob = (content: string | Uint8Array<ArrayBuffer>) => new Blob([content]);
const survey = (content: string | Uint8Array<ArrayBuffer>) => surveyFile(blob(content), known, now, () => undefined);

/** The mapping that the page offers before anything is changed. */
function offered(found: FileSurvey, more: Partial<FileMapping> = {}): FileMapping {
  const columns = guessColumns(found.columns);
  const each = (column: VisitColumn, guess: (value: string) => number | null) => {
    const index = columns[column];
    return Object.fromEntries(
      (index === null ? [] : (found.columns[index].values ?? [])).map(({ value }) => [value, guess(value)]),
    );
  };
  const areaIndex = columns.care_area;
  const orders = visitColumns.map((column) => {
    const index = columns[column];
    return [column, index !== null && found.columns[index].dateOrder === 'month first' ? 'month first' : 'day first'];
  });
  return {
    columns,
    dateOrders: Object.fromEntries(orders) as FileMapping['dateOrders'],
    statedOrder: null,
    repeatedHour: 'refuse',
    areas: Object.fromEntries(
      (areaIndex === null ? [] : (found.columns[areaIndex].values ?? [])).map(({ value }) => [
        value,
        guessArea(value, areas),
      ]),
    ),
    dispositions: each('disposition', guessDisposition),
    ambulances: each('arrived_by_ambulance', guessAmbulance),
    ...more,
  };
}

async function check(content: string | Uint8Array<ArrayBuffer>, more: Partial<FileMapping> = {}) {
  const found = await survey(content);
  const settings = {
    survey: found,
    mapping: offered(found, more),
    areaIds: areas.map(({ id }) => id),
    timeZone,
    shiftEnds: [],
    covered: [],
    now,
  };
  const { outcome, payload } = await checkFile(blob(content), settings, () => undefined);
  const sent = payload === null ? null : gunzipSync(Buffer.from(await payload.arrayBuffer())).toString();
  return { survey: found, outcome, sent };
}

const messy = [
  'Pt Name;NHS No;DOB;Arrival Date/Time;Placed Date/Time;Decision To Admit;Discharge Date/Time;Unit;Discharge Dest;Arr By Amb;Complaint',
  'Fairweather, Olivia;943 476 5919;01/02/1950;25/10/2026 22:10;25/10/2026 22:30;;26/10/2026 01:15;ACUTE;Home;N;fell off a ladder at home',
  'Quillfeather, Tamsin;943 476 5870;03/04/1981;26/10/2026 09:05;;26/10/2026 11:00;26/10/2026 13:00;minors;Admitted to ward;Y;chest pain since the morning',
  'Okell, Bram;943 476 5838;05/06/2011;27/10/2026 09:05;;;27/10/2026 08:00;Acute;LWBS;Y;cut to the left hand',
].join('\r\n');

describe('a messy export', () => {
  test('only the mapped columns of good rows make up what is sent, in the product’s own form', async () => {
    const { survey: found, outcome, sent } = await check(messy);
    expect(found).toMatchObject({ encoding: 'utf-8', form: { delimiter: ';', newline: '\n' }, rows: 3 });
    expect(found.columns.map((column) => column.identifier?.kind ?? null)).toEqual([
      'name',
      'national patient number',
      'date of birth',
      null,
      null,
      null,
      null,
      null,
      null,
      null,
      'free text',
    ]);
    // London was back on GMT at 22:10 on 25 October 2026, the day of the change.
    expect(sent?.trim().split('\n')).toEqual([
      canonicalHeader,
      '2026-10-25T22:10:00Z,2026-10-25T22:30:00Z,,2026-10-26T01:15:00Z,area-acute,home,no',
      '2026-10-26T09:05:00Z,,2026-10-26T11:00:00Z,2026-10-26T13:00:00Z,area-minors,admitted,yes',
    ]);
    expect(outcome).toMatchObject({
      refused: null,
      report: {
        rows: 3,
        goodRows: 2,
        problems: [{ problem: 'before arrival', column: 'departure_at', rows: 1, examples: [3] }],
      },
    });
  });

  test('what is sent reads back on the server’s side without a fault', async () => {
    const { sent } = await check(messy);
    const reader = new VisitFileReader({
      parse: makeRecordParser({ delimiter: ',', newline: '\n' }),
      places: (header) => canonicalPlaces(header, now),
      reading: canonicalReading(new Map(areas.map(({ id }, index) => [id, index]))),
      now,
    });
    reader.push(sent ?? '');
    expect(reader.end()).toMatchObject({ refused: null, report: { rows: 2, goodRows: 2, problems: [] } });
  });

  test('gzipped, in Windows-1252, with old line ends, it is the same', async () => {
    const plain = (await check(messy)).sent;
    expect((await check(new Uint8Array(gzipSync(messy)))).sent).toBe(plain);
    expect((await check(messy.replaceAll('\r\n', '\r'))).sent).toBe(plain);
    expect((await check(`\uFEFF${messy}`)).sent).toBe(plain);
    const latin = new Uint8Array(Buffer.from(messy.replace('ladder', 'café'), 'latin1'));
    const { survey: found, sent } = await check(latin);
    expect(found.encoding).toBe('windows-1252');
    expect(sent).toBe(plain);
  });
});

const times = (rows: string[]) => ['arrival,area', ...rows.map((row) => `${row},Acute`)].join('\n');

describe('the order of day and month', () => {
  test.each([
    ['day first', ['25/12/2025 10:00', '03/04/2026 10:00']],
    ['month first', ['12/25/2025 10:00', '03/04/2026 10:00']],
    ['ambiguous', ['01/02/2026 10:00', '03/04/2026 10:00']],
    ['mixed', ['25/12/2025 10:00', '12/25/2025 10:00']],
    ['not needed', ['2026-03-04 10:00', '4 Mar 2026 10:00']],
  ])('%s', async (verdict, rows) => {
    expect((await survey(times(rows))).columns[0]).toMatchObject({ isTime: true, dateOrder: verdict });
  });

  test('a slip among many is a problem row, not another order', async () => {
    const rows = Array.from({ length: 300 }, (_, row) => `${String(13 + (row % 12))}/03/2026 10:00`);
    const { outcome, survey: found } = await check(times([...rows, '03/25/2026 10:00']));
    expect(found.columns[0]).toMatchObject({ dateOrder: 'day first', contraryDates: 1 });
    expect(outcome).toMatchObject({
      report: { goodRows: 300, problems: [{ problem: 'time unreadable', rows: 1, examples: [301] }] },
    });
  });
});

describe('clock changes', () => {
  // London: 01:00–02:00 on 25 October 2026 came twice, 01:00–02:00 on 29 March 2026 never (IANA time zone data).
  const csv = times(['25/10/2026 01:30', '29/03/2026 01:30', '25/10/2026 03:30']);
  test.each([
    ['refuse', ['2026-10-25T03:30:00Z']],
    ['earlier', ['2026-10-25T00:30:00Z', '2026-10-25T03:30:00Z']],
    ['later', ['2026-10-25T01:30:00Z', '2026-10-25T03:30:00Z']],
  ] as const)('the repeated hour, %s', async (repeatedHour, arrivals) => {
    const { outcome, sent } = await check(csv, { repeatedHour });
    expect(
      sent
        ?.trim()
        .split('\n')
        .slice(1)
        .map((line) => line.split(',')[0]),
    ).toEqual(arrivals);
    expect(outcome.refused === null && outcome.report.problems.map(({ problem }) => problem)).toEqual(
      repeatedHour === 'refuse' ? ['time skipped', 'time repeated'] : ['time skipped'],
    );
  });
});

describe('planted identifiers', () => {
  const clean = (rows: number) =>
    Array.from({ length: rows }, (_, row) => `2026-03-${String(1 + (row % 28)).padStart(2, '0')} 10:00,Acute,home,N`);
  const header = 'arrival,area,disposition,ambulance';
  const planted: [kind: string, value: string][] = [
    ['name', 'Fairweather, Olivia'],
    ['date of birth', '01/02/1950'],
    ['record number', 'MRN 482913'],
    ['insurance number', 'AB 12 34 56 C'],
    ['national patient number', '943 476 5919'],
    ['telephone number', '07700 900123'],
    ['e-mail address', 'olivia@example.org'],
    ['postal address', '12 Mill Lane'],
    ['postcode', 'SW1A 1AA'],
    ['web address', 'www.example.org'],
    ['IP address', '192.0.2.44'],
    ['free text', 'came in after falling off a ladder at home today'],
  ];
  test.each(planted)('one %s in a thousand rows, in any column', async (kind, value) => {
    const quoted = `"${value}"`;
    const rows = clean(1000);
    const among = (line: string) => [header, ...rows.slice(0, 500), line, ...rows.slice(500)].join('\n');
    // Among times: refused by the check. Among a few words: the column is barred before it can be mapped.
    const { outcome, sent } = await check(among(`${quoted},Acute,home,N`));
    expect(outcome).toMatchObject({
      identifying: true,
      refused: [{ message: expect.stringContaining(kind) as string }],
    });
    expect(JSON.stringify(outcome)).not.toContain(value);
    expect(sent).toBeNull();
    for (const [place, line] of [
      [1, `2026-03-01 10:00,${quoted},home,N`],
      [2, `2026-03-01 10:00,Acute,${quoted},N`],
      [3, `2026-03-01 10:00,Acute,home,${quoted}`],
    ] as const) {
      const { columns } = await survey(among(line));
      expect(columns[place]).toMatchObject({ isBarred: true, identifier: { kind, from: 'values' }, values: null });
    }
  });
});

describe('files that cannot be read', () => {
  test.each([
    ['empty', '', /empty/],
    ['blank', '\n \n', /empty|no visits/],
    ['header only', 'arrival,area\n', /no visits under it/],
    ['one column', 'arrival\n2026-03-01 10:00\n', /Only one column/],
    ['a torn workbook', 'PK\u0003\u0004xx', /workbook is damaged or cut short/],
    ['a binary file', '\u0001\u0002\u0003arrival,area', /binary/],
    ['NUL far inside', `arrival,area\n${'2026-03-01 10:00,Acute\n'.repeat(1000)}\0`, /NUL/],
    [
      'an open quotation mark',
      `arrival,area\n2026-03-01 10:00,Acute\n"2026-03-02 10:00,Acute\n`,
      /opened at or after row 2/,
    ],
    ['a long line', `arrival,area\n${'x'.repeat(300_000)}`, /longer than 100,000/],
    ['a torn gzip', new Uint8Array(gzipSync(messy).subarray(0, 60)), /damaged or cut short/],
    ['UTF-16', new Uint8Array(Buffer.from('\uFEFFarrival,area\n', 'utf16le')), /UTF-16/],
    ['a gzipped PDF', new Uint8Array(gzipSync('%PDF-1.7')), /PDF/],
  ])('%s', async (_, content, message) => {
    await expect(survey(content)).rejects.toThrow(message);
  });
});
