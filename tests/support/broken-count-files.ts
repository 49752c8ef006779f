import { canonicalCountHeader } from '../../shared/domain/canonical-count.ts';
import { countLine } from './build-count-csv.ts';
import type { BrokenFile } from './broken-visit-files.ts';

const date = '2026-09-20';
const whole = (over: Record<number, string> = {}): string =>
  [canonicalCountHeader, ...[0, 1, 2].map((hour) => over[hour] ?? countLine({ date, hour }))].join('\n') + '\n';
const names = 'care_area, local_date, hour, arrivals, departures';

/** Broken files of hourly counts, read on 2026-09-21T14:13:20Z at a site in London, with the exact words of the refusal. */
export const brokenCountFiles: BrokenFile[] = [
  {
    name: 'header only',
    body: `${canonicalCountHeader}\n`,
    said: ['file: The file has a header but no hours under it.'],
  },
  {
    name: 'no hour column',
    body: 'care_area,local_date,arrivals\nAcute,2026-09-20,3\n',
    said: ['header: The column hour is missing.'],
  },
  {
    name: 'a column that is not ours',
    body: `${canonicalCountHeader},acuity\n`,
    said: [`column 6: It is none of the columns that hourly counts have (${names}).`],
  },
  {
    name: 'a column named twice',
    body: 'care_area,local_date,hour,arrivals,arrivals\n',
    said: ['column 5: The header names arrivals twice.'],
  },
  {
    name: 'a column of record numbers',
    body: `${canonicalCountHeader},mrn\n`,
    said: ['column 6: Its header says that it holds a record number. Leave this column out.'],
  },
  {
    name: 'more fields than the header',
    body: whole({ 1: `${countLine({ date, hour: 1 })},7` }),
    said: ['row: The row has more or fewer fields than the header. 1 row, row 2.'],
  },
  {
    name: 'no area',
    body: whole({ 1: countLine({ area: '', date, hour: 1 }) }),
    said: ['care_area (Care area): No care area is given. 1 row, row 2.'],
  },
  {
    name: 'an unknown area',
    body: whole({ 1: countLine({ area: 'Annexe', date, hour: 1 }) }),
    said: ['care_area (Care area): The care area is not one of the site’s. 1 row, row 2.'],
  },
  {
    name: 'a name in place of an area',
    body: whole({ 1: countLine({ area: 'Mr John Smith', date, hour: 1 }) }),
    said: ['column care_area (Care area): 1 row looks like a name. Take it out of the export and try again.'],
  },
  {
    name: 'no date',
    body: whole({ 1: countLine({ date: '', hour: 1 }) }),
    said: ['local_date (Date): No date is given. 1 row, row 2.'],
  },
  {
    name: 'a date of another form',
    body: whole({ 1: countLine({ date: '20/09/2026', hour: 1 }) }),
    said: ['local_date (Date): The date cannot be read. Write year-month-day, for instance 2026-03-04. 1 row, row 2.'],
  },
  {
    name: 'a date that the calendar does not have',
    body: whole({ 1: countLine({ date: '2026-02-30', hour: 1 }) }),
    said: ['local_date (Date): The date cannot be read. Write year-month-day, for instance 2026-03-04. 1 row, row 2.'],
  },
  {
    name: 'dates of birth',
    body: whole({ 1: countLine({ date: '1961-05-20', hour: 1 }) }),
    said: ['column local_date (Date): 1 row looks like a date of birth. Take it out of the export and try again.'],
  },
  {
    name: 'hour 24',
    body: whole({ 1: countLine({ date, hour: 24 }) }),
    said: ['hour (Hour): The hour is not a whole number from 0 to 23. 1 row, row 2.'],
  },
  {
    name: 'no hour',
    body: whole({ 1: countLine({ date, hour: '' }) }),
    said: ['hour (Hour): No hour is given. 1 row, row 2.'],
  },
  {
    name: 'an hour of tomorrow',
    body: whole({ 1: countLine({ date: '2026-09-22', hour: 1 }) }),
    said: ['hour (Hour): The hour was not over yet. 1 row, row 2.'],
  },
  {
    name: 'the hour under way',
    body: whole({ 1: countLine({ date: '2026-09-21', hour: 15 }) }),
    said: ['hour (Hour): The hour was not over yet. 1 row, row 2.'],
  },
  {
    name: 'arrivals in the hour that the clock change skipped',
    body: whole({ 1: countLine({ date: '2026-03-29', hour: 1 }) }),
    said: ['hour (Hour): The clock change skipped this hour, but somebody is counted in it. 1 row, row 2.'],
  },
  {
    name: 'an hour given twice',
    body: whole({ 1: countLine({ date, hour: 0 }) }),
    said: ['hour (Hour): The same hour of the same area stands in an earlier row. 1 row, row 2.'],
  },
  {
    name: 'no arrivals given',
    body: whole({ 1: countLine({ date, hour: 1, arrivals: '' }) }),
    said: ['arrivals (Arrivals): No number of arrivals is given. Write 0 where nobody came. 1 row, row 2.'],
  },
  {
    name: 'a negative count',
    body: whole({ 1: countLine({ date, hour: 1, arrivals: -1 }) }),
    said: ['arrivals (Arrivals): The count is not a whole number from 0. 1 row, row 2.'],
  },
  {
    name: 'a mean in place of a count',
    body: whole({ 1: countLine({ date, hour: 1, departures: 2.5 }) }),
    said: ['departures (Departures): The count is not a whole number from 0. 1 row, row 2.'],
  },
  {
    name: 'a count that no area has',
    body: whole({ 1: countLine({ date, hour: 1, arrivals: 1000 }) }),
    said: ['arrivals (Arrivals): The count is over 999: no care area sees as many patients in an hour. 1 row, row 2.'],
  },
  {
    name: 'record numbers in place of counts',
    body: whole({ 1: countLine({ date, hour: 1, arrivals: 83641207 }) }),
    said: ['column arrivals (Arrivals): 1 row looks like a record number. Take it out of the export and try again.'],
  },
  {
    name: 'hours without a row',
    body: whole({ 1: countLine({ area: 'Resuscitation', date, hour: 1 }) }),
    said: [
      'Acute: 1 of 3 hours have no row, the first: 2026-09-20 01:00. Write 0 where nobody came; what is not known belongs in no file.',
      'Resuscitation: 2 of 3 hours have no row, the first: 2026-09-20 00:00. Write 0 where nobody came; what is not known belongs in no file.',
    ],
  },
  {
    name: 'departures for some hours only',
    body: whole({ 1: countLine({ date, hour: 1, departures: 2 }) }),
    said: ['Acute: Departures are given for 1 of 3 hours. Give them for every hour of an area or for none.'],
  },
  {
    name: 'nobody ever came',
    body: whole(Object.fromEntries([0, 1, 2].map((hour) => [hour, countLine({ date, hour, arrivals: 0 })]))),
    said: ['file: No hour of the file has an arrival.'],
  },
];
