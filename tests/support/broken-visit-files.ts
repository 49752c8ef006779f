import { gzipSync } from 'node:zlib';
import { canonicalHeader } from '../../shared/domain/canonical-visit.ts';
import { visitLine } from './build-visit-csv.ts';

/** 2026-09-21T14:13:20Z, the clock that the broken files are read at. */
export const brokenAt = 1_790_000_000;

const day = 86_400;
const good = visitLine({ arrival: brokenAt - day, departure: brokenAt - day + 7200 });
const file = (...lines: string[]) => `${[canonicalHeader, ...lines].join('\n')}\n`;

/** A broken visit log in the product's own form: its name, its bytes, and where and what is said of it. */
export interface BrokenFile {
  name: string;
  body: string | Buffer;
  /** `at: message`, in their order. */
  said: string[];
}

/** Files that are refused whole, with the exact words of the refusal. */
export const refusedFiles: BrokenFile[] = [
  {
    name: 'empty',
    body: '',
    said: ['file: The file is empty. Choose a file with a header row and at least one visit.'],
  },
  {
    name: 'blank lines only',
    body: '\n\n  \n',
    said: ['file: The file is empty. Choose a file with a header row and at least one visit.'],
  },
  {
    name: 'a byte order mark and nothing else',
    body: '\uFEFF',
    said: ['file: The file is empty. Choose a file with a header row and at least one visit.'],
  },
  { name: 'header only', body: `${canonicalHeader}\n`, said: ['file: The file has a header but no visits under it.'] },
  {
    name: 'wrong columns',
    body: 'when,where\n1,2\n',
    said: [
      'column 1: It is none of the columns that a visit log has (arrival_at, bed_space_at, admission_decision_at, departure_at, care_area, disposition, arrived_by_ambulance).',
      'column 2: It is none of the columns that a visit log has (arrival_at, bed_space_at, admission_decision_at, departure_at, care_area, disposition, arrived_by_ambulance).',
      'header: The column arrival_at is missing.',
      'header: The column care_area is missing.',
    ],
  },
  {
    name: 'no header',
    body: `${good}\n${good}\n`,
    said: [
      'column 1: It is none of the columns that a visit log has (arrival_at, bed_space_at, admission_decision_at, departure_at, care_area, disposition, arrived_by_ambulance).',
      'column 2: It has no name in the header.',
      'column 3: It has no name in the header.',
      'column 4: It is none of the columns that a visit log has (arrival_at, bed_space_at, admission_decision_at, departure_at, care_area, disposition, arrived_by_ambulance).',
      'column 5: It is none of the columns that a visit log has (arrival_at, bed_space_at, admission_decision_at, departure_at, care_area, disposition, arrived_by_ambulance).',
      'column 6: It is none of the columns that a visit log has (arrival_at, bed_space_at, admission_decision_at, departure_at, care_area, disposition, arrived_by_ambulance).',
      'column 7: It is none of the columns that a visit log has (arrival_at, bed_space_at, admission_decision_at, departure_at, care_area, disposition, arrived_by_ambulance).',
      'header: The column arrival_at is missing.',
      'header: The column care_area is missing.',
    ],
  },
  {
    name: 'no care area column',
    body: 'arrival_at,departure_at\n1,2\n',
    said: ['header: The column care_area is missing.'],
  },
  {
    name: 'no arrival column',
    body: 'care_area,departure_at\n1,2\n',
    said: ['header: The column arrival_at is missing.'],
  },
  {
    name: 'a column named twice',
    body: 'arrival_at,arrival_at,care_area\n1,2,3\n',
    said: ['column 2: The header names arrival_at twice.'],
  },
  {
    name: 'a nameless column',
    body: 'arrival_at,care_area,\n1,2,3\n',
    said: ['column 3: It has no name in the header.'],
  },
  {
    name: 'a column that is not ours',
    body: 'arrival_at,care_area,acuity\n1,2,3\n',
    said: [
      'column 3: It is none of the columns that a visit log has (arrival_at, bed_space_at, admission_decision_at, departure_at, care_area, disposition, arrived_by_ambulance).',
    ],
  },
  {
    name: 'semicolons',
    body: file(good).replaceAll(',', ';'),
    said: ['header: The columns are not separated by commas. Save the file with commas.'],
  },
  {
    name: 'tabs',
    body: file(good).replaceAll(',', '\t'),
    said: ['header: The columns are not separated by commas. Save the file with commas.'],
  },
  {
    name: 'bars',
    body: file(good).replaceAll(',', '|'),
    said: ['header: The columns are not separated by commas. Save the file with commas.'],
  },
  {
    name: 'binary',
    body: Buffer.concat([Buffer.from(file(good)), Buffer.alloc(64)]),
    said: ['file: This is a binary file, not CSV. Export the visits as CSV (UTF-8).'],
  },
  {
    name: 'NUL far inside',
    body: `${file(...Array.from({ length: 400 }, () => good))}\0\n`,
    said: ['file: The file holds bytes that no text has (NUL): it is not a CSV file, or it was damaged on the way.'],
  },
  {
    name: 'a workbook',
    body: Buffer.from('PK\u0003\u0004 and so on'),
    said: [
      'file: This is a spreadsheet workbook or a zip archive, not CSV. Open it and save the sheet as CSV (UTF-8).',
    ],
  },
  {
    name: 'an old workbook',
    body: Buffer.from([0xd0, 0xcf, 0x11, 0xe0, 0xa1]),
    said: [
      'file: This is an old spreadsheet workbook (.xls), or one locked with a password. Open it and save the sheet as CSV (UTF-8) or as .xlsx without a password.',
    ],
  },
  {
    name: 'a PDF',
    body: Buffer.from('%PDF-1.7 and so on'),
    said: ['file: This is a PDF document, not CSV. Export the visits as CSV.'],
  },
  {
    name: 'a packed file sent as text',
    body: gzipSync(file(good)),
    said: ['file: This is a binary file, not CSV. Export the visits as CSV (UTF-8).'],
  },
  {
    name: 'UTF-16, little end first',
    body: Buffer.from(`\uFEFF${file(good)}`, 'utf16le'),
    said: ['file: This file is saved as UTF-16. Save it as CSV (UTF-8).'],
  },
  {
    name: 'UTF-16, big end first',
    body: Buffer.from(`\uFEFF${file(good)}`, 'utf16le').swap16(),
    said: ['file: This file is saved as UTF-16. Save it as CSV (UTF-8).'],
  },
  {
    name: 'Windows-1252',
    body: Buffer.from(file(good.replace('Acute', 'Caf\u00e9')), 'latin1'),
    said: ['file: The text is not encoded in UTF-8. Save the file as CSV (UTF-8) and try again.'],
  },
  {
    name: 'an open quotation mark',
    body: file(good, `"${good}`, good),
    said: ['row 2: A quotation mark is opened at or after row 2 and never closed. Correct it and export again.'],
  },
  {
    name: 'an open quotation mark in a long file',
    body: file(`"${good}`, ...Array.from({ length: 3000 }, () => good)),
    said: ['row 1: A quotation mark is opened at or after row 1 and never closed. Correct it and export again.'],
  },
  {
    name: 'an open quotation mark in the header',
    body: `"${file(good)}`,
    said: [
      'the header: A quotation mark is opened at or after the header and never closed. Correct it and export again.',
    ],
  },
  {
    name: 'a very long line',
    body: `${canonicalHeader}\n${'x'.repeat(300_000)}`,
    said: ['row 1: There is a line longer than 100,000 characters at row 1: this is not a visit log.'],
  },
  {
    name: 'a column of names',
    body: `${canonicalHeader},Patient name\n${good},x\n`,
    said: ['column 8: Its header says that it holds a name. Leave this column out.'],
  },
  {
    name: 'a date of birth among arrivals',
    body: file(good, visitLine({ arrival: '1950-02-01T00:00:00Z' })),
    said: ['column arrival_at (Arrival): 1 row looks like a date of birth. Take it out of the export and try again.'],
  },
  {
    name: 'a telephone number among areas',
    body: file(good, visitLine({ arrival: brokenAt - day, area: '07700 900123' })),
    said: [
      'column care_area (Care area): 1 row looks like a telephone number. Take it out of the export and try again.',
    ],
  },
];

/** Files with one problem row after a good one, with the exact words of the report. */
export const problemFiles: BrokenFile[] = [
  {
    name: 'too few fields',
    body: file(good, '2026-09-01T10:00:00Z,,,,Acute'),
    said: ['row: The row has more or fewer fields than the header. 1 row, row 2.'],
  },
  {
    name: 'too many fields',
    body: file(good, `${good},more`),
    said: ['row: The row has more or fewer fields than the header. 1 row, row 2.'],
  },
  {
    name: 'no arrival',
    body: file(good, visitLine({ arrival: '' })),
    said: ['arrival_at (Arrival): No time is given, and the column is needed. 1 row, row 2.'],
  },
  {
    name: 'a word for a time',
    body: file(good, visitLine({ arrival: 'yesterday' })),
    said: ['arrival_at (Arrival): The time cannot be read. 1 row, row 2.'],
  },
  {
    name: 'a time without an offset',
    body: file(good, visitLine({ arrival: '2026-09-01T10:00:00' })),
    said: ['arrival_at (Arrival): The time cannot be read. 1 row, row 2.'],
  },
  {
    name: 'a date without a time',
    body: file(good, visitLine({ arrival: '2026-09-01' })),
    said: ['arrival_at (Arrival): The time cannot be read. 1 row, row 2.'],
  },
  {
    name: 'a day that does not exist',
    body: file(good, visitLine({ arrival: '2026-02-30T10:00:00Z' })),
    said: ['arrival_at (Arrival): The time cannot be read. 1 row, row 2.'],
  },
  {
    name: 'an hour that does not exist',
    body: file(good, visitLine({ arrival: '2026-02-03T25:00:00Z' })),
    said: ['arrival_at (Arrival): The time cannot be read. 1 row, row 2.'],
  },
  {
    name: 'day and month first',
    body: file(good, visitLine({ arrival: '01/09/2026 10:00' })),
    said: ['arrival_at (Arrival): The time cannot be read. 1 row, row 2.'],
  },
  {
    name: 'an arrival in the future',
    body: file(good, visitLine({ arrival: brokenAt + 3600 })),
    said: ['arrival_at (Arrival): The time lies in the future. 1 row, row 2.'],
  },
  {
    name: 'a departure in the future',
    body: file(good, visitLine({ arrival: brokenAt - 60, departure: brokenAt + 3600 })),
    said: ['departure_at (Departure): The time lies in the future. 1 row, row 2.'],
  },
  {
    name: 'a departure before the arrival',
    body: file(good, visitLine({ arrival: brokenAt - day, departure: brokenAt - day - 60 })),
    said: ['departure_at (Departure): The time lies before the arrival. 1 row, row 2.'],
  },
  {
    name: 'a stay over 30 days',
    body: file(good, visitLine({ arrival: brokenAt - 40 * day, departure: brokenAt - day })),
    said: ['departure_at (Departure): The stay is longer than 30 days. 1 row, row 2.'],
  },
  {
    name: 'a bed space before the arrival',
    body: file(good, visitLine({ arrival: brokenAt - day, bedSpace: brokenAt - day - 60 })),
    said: ['bed_space_at (Bed space): The time lies before the arrival. 1 row, row 2.'],
  },
  {
    name: 'a bed space after the departure',
    body: file(good, visitLine({ arrival: brokenAt - day, bedSpace: brokenAt - 60, departure: brokenAt - 3600 })),
    said: ['bed_space_at (Bed space): The time lies after the departure. 1 row, row 2.'],
  },
  {
    name: 'a decision before the arrival',
    body: file(good, visitLine({ arrival: brokenAt - day, decision: brokenAt - day - 60 })),
    said: ['admission_decision_at (Admission decision): The time lies before the arrival. 1 row, row 2.'],
  },
  {
    name: 'a decision after the departure',
    body: file(good, visitLine({ arrival: brokenAt - day, decision: brokenAt - 60, departure: brokenAt - 3600 })),
    said: ['admission_decision_at (Admission decision): The time lies after the departure. 1 row, row 2.'],
  },
  {
    name: 'no care area',
    body: file(good, visitLine({ arrival: brokenAt - day, area: '' })),
    said: ['care_area (Care area): No care area is given. 1 row, row 2.'],
  },
  {
    name: 'an area of another site',
    body: file(good, visitLine({ arrival: brokenAt - day, area: 'Majors' })),
    said: ['care_area (Care area): The care area is not one of the site’s. 1 row, row 2.'],
  },
  {
    name: 'an unknown disposition',
    body: file(good, visitLine({ arrival: brokenAt - day, disposition: 'ward 7' })),
    said: [
      'disposition (Disposition): The disposition is none of home, admitted, transferred, left before treatment. 1 row, row 2.',
    ],
  },
  {
    name: 'neither yes nor no',
    body: file(good, visitLine({ arrival: brokenAt - day, ambulance: 'maybe' })),
    said: ['arrived_by_ambulance (By ambulance): The answer is neither yes nor no. 1 row, row 2.'],
  },
  {
    name: 'several faults in one row',
    body: file(good, visitLine({ arrival: 'soon', area: '', disposition: 'x1', ambulance: '?' })),
    said: [
      'arrival_at (Arrival): The time cannot be read. 1 row, row 2.',
      'care_area (Care area): No care area is given. 1 row, row 2.',
      'disposition (Disposition): The disposition is none of home, admitted, transferred, left before treatment. 1 row, row 2.',
      'arrived_by_ambulance (By ambulance): The answer is neither yes nor no. 1 row, row 2.',
    ],
  },
];
