// @vitest-environment node
import { readFileSync } from 'node:fs';
import { describe, expect, test } from 'vitest';
import { checkFile } from '../../../../src/features/visit-logs/check-file.ts';
import { offerMapping } from '../../../../src/features/visit-logs/mapping.ts';
import { readWorkbook } from '../../../../src/features/visit-logs/read-workbook.ts';
import { surveyFile } from '../../../../src/features/visit-logs/survey-file.ts';
import { formatShows, serialText } from '../../../../src/features/visit-logs/workbook-date.ts';
import { buildWorkbook, serialOf, type MadeCell } from '../../../support/build-workbook.ts';
import { strToU8, zipSync } from 'fflate';

/** 2026-12-01T00:00:00Z */
const now = 1_796_083_200;

async function csvOf(bytes: Uint8Array<ArrayBuffer>) {
  let text = '';
  const facts = await readWorkbook(
    new Blob([bytes]),
    (piece) => {
      text += piece;
      return true;
    },
    () => undefined,
  );
  return { text, facts };
}

const rowsOf = async (...rows: (readonly MadeCell[])[]) =>
  (await csvOf(buildWorkbook([{ name: 'Visits', rows }]))).text.trimEnd().split('\n');

describe('a workbook that openpyxl 3.0 wrote', () => {
  // tests/reference/make-workbook.py wrote it and, with the csv module, what its first sheet shows.
  const bytes = new Uint8Array(readFileSync('tests/reference/visits.xlsx'));
  const expected = readFileSync('tests/reference/visits-from-workbook.csv', 'utf8');

  test('reads as what was written into it', async () => {
    const { text, facts } = await csvOf(bytes);
    expect(text).toBe(expected);
    expect(facts).toEqual({ sheetName: 'Visits & stays', otherSheets: 1 });
  });

  test('goes through the same mapping, screening and check as CSV does', async () => {
    const areas = [
      { id: 'a', name: 'Acute' },
      { id: 'b', name: 'Minors' },
    ];
    const outcomes = await Promise.all(
      [bytes, expected].map(async (content) => {
        const file = new Blob([content]);
        const survey = await surveyFile(file, new Set(['Acute', 'Minors']), now, () => undefined);
        const mapping = offerMapping(survey, areas);
        const settings = {
          survey,
          mapping,
          areaIds: ['a', 'b'],
          timeZone: 'Europe/London',
          shiftEnds: [],
          covered: [],
          now,
        };
        const { outcome } = await checkFile(file, settings, () => undefined);
        return { kind: survey.kind, columns: survey.columns, rows: survey.rows, outcome };
      }),
    );
    expect(outcomes[0].kind).toBe('workbook');
    expect(outcomes[1].kind).toBe('text');
    expect({ ...outcomes[0], kind: '' }).toEqual({ ...outcomes[1], kind: '' });
    expect(outcomes[0].outcome).toMatchObject({ refused: null, report: { rows: 40, goodRows: 40 } });
  });
});

describe('cells', () => {
  test('shared, inline and rich texts, numbers, truth values and errors', async () => {
    const rich = (reference: string) =>
      `<c r="${reference}" t="inlineStr"><is><r><t>Ma</t></r><rPh sb="0" eb="1"><t>no</t></rPh><r><t xml:space="preserve">jors &amp; co_x000A_</t></r></is></c>`;
    const raw = (xml: string) => ({ xml: (reference: string) => `<c r="${reference}" ${xml}</c>` });
    expect(
      await rowsOf(
        ['a', 'b', 'c', 'd', 'e', 'f'],
        [
          'say "yes", no',
          { xml: rich },
          9434765919,
          raw('t="b"><v>1</v>'),
          raw('t="e"><v>#N/A</v>'),
          raw('t="str"><f>A1&amp;"x"</f><v>made &lt;up&gt;</v>'),
        ],
      ),
    ).toEqual(['a,b,c,d,e,f', '"say ""yes"", no","Majors & co', '",9434765919,true,#N/A,made <up>']);
  });

  test('cells without a reference follow each other; gaps, short rows and empty rows keep the columns', async () => {
    const bare = { xml: () => '<c t="str"><v>bare</v></c>' };
    expect(await rowsOf(['a', 'b', 'c'], [null, 'x', null], [null, null, null], [bare, bare], ['', '', 'z'])).toEqual([
      'a,b,c',
      ',x,',
      'bare,bare,',
      ',,z',
    ]);
  });

  test('dates come out as the sheet shows them, to the second, and numbers under other formats stay numbers', async () => {
    expect(
      await rowsOf(
        ['at', 'day', 'clock', 'number'],
        [
          { serial: serialOf(2026, 3, 4, 2, 24), style: 1 },
          { serial: serialOf(2026, 3, 4), style: 2 },
          { serial: 0.75, style: 3 },
          { serial: 46_085.5, style: 4 },
        ],
        [
          { serial: serialOf(2026, 3, 4), style: 1 },
          { serial: serialOf(2026, 3, 4, 23, 59, 59), style: 2 },
        ],
      ),
    ).toEqual([
      'at,day,clock,number',
      '2026-03-04 02:24:00,2026-03-04,18:00:00,46085.5',
      '2026-03-04 00:00:00,2026-03-04 23:59:59,,',
    ]);
  });

  // ECMA-376 part 1, 18.17.4: serial numbers of both epochs; the values are those of its examples and of any calendar.
  test.each([
    [25_569, 1900, '1970-01-01'],
    [61, 1900, '1900-03-01'],
    [59, 1900, '1900-02-28'],
    [1, 1900, '1900-01-01'],
    [38_749, 1900, '2006-02-01'],
    [37_287, 1904, '2006-02-01'],
  ] as const)('serial number %d of the epoch %d is %s', (serial, epoch, day) => {
    expect(serialText(serial, epoch, 'date')).toBe(day);
  });

  test.each([
    [14, undefined, 'date'],
    [22, undefined, 'clock'],
    [45, undefined, 'clock'],
    [0, undefined, null],
    [9, undefined, null],
    [164, 'dd.mm.yyyy', 'date'],
    [164, '[$-409]m/d/yy h:mm AM/PM;@', 'clock'],
    [164, '[h]:mm', 'clock'],
    [164, '"days" 0', null],
    [164, '0\\d', null],
    [164, '[Red]0.00', null],
    [164, 'General', null],
  ] as const)('format %d %s shows %s', (id, code, shows) => {
    expect(formatShows(id, code)).toBe(shows);
  });
});

describe('workbooks that cannot be read', () => {
  const rows = [
    ['a', 'b'],
    ['1', '2'],
  ];
  const good = buildWorkbook([{ name: 'S', rows }]);
  const zip = (files: Record<string, string>) =>
    zipSync(Object.fromEntries(Object.entries(files).map(([name, text]) => [name, strToU8(text)])));
  const cut = 'The workbook is damaged or cut short. Save it again, or save the sheet as CSV (UTF-8).';
  test.each([
    ['cut short', good.slice(0, good.length - 200), cut],
    [
      'a zip archive',
      zip({ 'visits.csv': 'a,b' }),
      'This is a zip archive without a workbook in it. Unpack it and choose the CSV file.',
    ],
    [
      'a binary workbook',
      zip({ 'xl/workbook.bin': 'x' }),
      'This is a binary workbook (.xlsb). Save it as .xlsx, or save the sheet as CSV (UTF-8).',
    ],
    [
      'an OpenDocument file',
      zip({ 'content.xml': '<x/>' }),
      'This is an OpenDocument file. Save the sheet as .xlsx or as CSV (UTF-8).',
    ],
    [
      'no first sheet',
      buildWorkbook([{ name: 'S', rows }], { leaveOut: ['xl/worksheets/sheet1.xml'] }),
      'The first sheet of the workbook is not a sheet of cells. Save the sheet with the visits as CSV (UTF-8).',
    ],
    [
      'broken XML',
      zip({
        'xl/workbook.xml': '<workbook><sheets><sheet name="S" r:id="x"/></sheets></workbook>',
        'xl/worksheets/sheet1.xml': '<worksheet><sheetData><row><c',
      }),
      'The workbook is damaged: what it holds is not what a workbook holds. Save it again, or save the sheet as CSV (UTF-8).',
    ],
    [
      'a cell far to the right',
      buildWorkbook([{ name: 'S', rows: [['a', 'b', { xml: () => '<c r="ZZZ1" t="str"><v>x</v></c>' }]] }]),
      'The sheet has cells beyond its 2,000th column. Delete them, or save the visits as CSV (UTF-8).',
    ],
    [
      'an empty sheet',
      buildWorkbook([{ name: 'S', rows: [] }]),
      'The file is empty. Choose a file with a header row and at least one visit.',
    ],
  ])('%s', async (_, bytes, message) => {
    await expect(surveyFile(new Blob([bytes]), new Set(), now, () => undefined)).rejects.toThrow(
      expect.objectContaining({ name: 'UnreadableFileError', message }),
    );
  });

  test('a sheet that ends in the middle of its bytes is not read as a shorter one', async () => {
    const stored = buildWorkbook([{ name: 'S', rows: [...rows, ...Array.from({ length: 500 }, () => ['x', 'y'])] }]);
    const bytes = stored.slice();
    // Bytes in the middle of the packed sheet are spoilt.
    const middle = Math.floor(bytes.length / 2);
    bytes.fill(0xff, middle, middle + 40);
    await expect(csvOf(bytes)).rejects.toThrow(/damaged/);
  });
});
