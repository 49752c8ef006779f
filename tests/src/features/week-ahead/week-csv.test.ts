import Papa from 'papaparse';
import { describe, expect, it } from 'vitest';
import { weekFiles } from '../../../../src/features/week-ahead/week-csv.ts';
import { buildWeek, gapOf } from '../../../support/build-week.ts';
import { buildSite } from '../outlook/build-tonight.ts';

const week = buildWeek({ acute: { 14: gapOf(10, 0.69, { bedsThatDoNotExist: 6 }), 40: gapOf(2, 0.2) } });
const site = buildSite();
const until = week.outlook.result.days[7].to;
const files = weekFiles(week, week.outlook, site, until);

function read(fileName: string): Record<string, string>[] {
  const file = files.find((candidate) => candidate.fileName === `farrowmere-general-week-ahead-${fileName}.csv`);
  if (!file) throw new Error(`no file ${fileName}`);
  return Papa.parse<Record<string, string>>(file.text(), { header: true, comments: '#', skipEmptyLines: true }).data;
}

describe('weekFiles', () => {
  it('has a file for every table of the page, each with its cautions and what it was computed from at the head', () => {
    expect(files.map(({ fileName }) => fileName.slice('farrowmere-general-week-ahead-'.length))).toEqual([
      'gaps.csv',
      'shifts.csv',
      'need-by-hour.csv',
      'arrivals-by-hour.csv',
      'arrivals-by-shift.csv',
      'arrivals-by-day.csv',
      'admissions-by-day.csv',
      'hour-of-week.csv',
      'calendar.csv',
    ]);
    for (const file of files) {
      const head = file
        .text()
        .split('\r\n')
        .filter((line) => line.startsWith('# '));
      expect(head.join('\n')).toContain('Not for decisions about any individual patient');
      expect(head.join('\n')).toContain('not a reason to staff below your safe minimum');
      expect(head.join('\n')).toContain('planning risk of 10 %');
      expect(head.join('\n')).toContain('Lantern fair on 2026-12-05: unlike any day in the log');
      expect(head.join('\n')).toContain('plan version 3, engine 3, seed 7, 4000 replications');
    }
  });

  it('holds the figures of the page for the days shown and no more', () => {
    expect(read('gaps')).toEqual([
      expect.objectContaining({
        shift: 'Night',
        from: '5 Dec 2026, 21:00',
        area: 'Acute',
        'to add': '10',
        'of which do not exist': '6',
        'chance of any shortfall': '0.69',
        'nurse hours': '',
        'last chance to book': '4 Dec 2026, 21:00',
      }),
    ]);
    const shifts = read('shifts');
    expect(shifts).toHaveLength(2 * 24);
    expect(shifts[0]).toMatchObject({ area: 'Acute', median: '14', 'P97.5': '19', 'planned (fewest)': '20' });
    expect(read('need-by-hour')).toHaveLength(2 * (14 + 7 * 24));
    const days = read('arrivals-by-day');
    expect(days).toHaveLength(8 * 4);
    expect(days.find(({ whose, name }) => whose === 'by ambulance' && name === '2026-12-02')?.median).toBe('60');
    expect(read('admissions-by-day')).toHaveLength(8 * 3 * 2);
    const hours = read('hour-of-week');
    expect(hours).toHaveLength(168);
    expect(hours[20]).toMatchObject({ 'hour of week': 'Monday 20:00', Acute: '7', 'whole department': '8' });
    expect(read('calendar')).toEqual([
      expect.objectContaining({ name: 'Lantern fair', '90 % range from': '1.04', basis: 'stated' }),
    ]);
  });
});
