import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { DateOrderTally, readLocalTime } from '../../../shared/domain/local-time.ts';

const wall = (text: string) => Date.parse(`${text}Z`) / 1000;

describe('readLocalTime', () => {
  test.each([
    ['2026-04-03 14:05', '2026-04-03T14:05:00'],
    ['2026/04/03 14:05:09', '2026-04-03T14:05:09'],
    ['03/04/2026 14:05', '2026-04-03T14:05:00'],
    ['3.4.2026 14:05', '2026-04-03T14:05:00'],
    ['3-4-26 2:05 PM', '2026-04-03T14:05:00'],
    ['03/04/2026 12:05 am', '2026-04-03T00:05:00'],
    ['03-Apr-2026 14:05', '2026-04-03T14:05:00'],
    ['3 April 2026, 14:05', '2026-04-03T14:05:00'],
    ['Apr 3, 2026 2:05 p.m.', '2026-04-03T14:05:00'],
    ['202604031405', '2026-04-03T14:05:00'],
    ['20260403 14:05:09', '2026-04-03T14:05:09'],
    ['02/04/2026 24:00', '2026-04-03T00:00:00'],
    ['29/02/2024 00:00', '2024-02-29T00:00:00'],
  ])('%s, day first', (text, shown) => {
    expect(readLocalTime(text, 'day first')).toBe(wall(shown));
  });

  test('either order is read back as it was written, every day of years to come', () => {
    fc.assert(
      fc.property(fc.integer({ min: 946_684_800, max: 4_102_444_799 }), (at) => {
        const [date, time] = new Date(at * 1000).toISOString().slice(0, 19).split('T');
        const [year, month, day] = date.split('-');
        expect(readLocalTime(`${day}/${month}/${year} ${time}`, 'day first')).toBe(at);
        expect(readLocalTime(`${month}/${day}/${year} ${time}`, 'month first')).toBe(at);
      }),
    );
  });

  test.each([
    '2026-04-03',
    '31/02/2026 10:00',
    '04/25/2026 10:00',
    '29/02/2026 10:00',
    '03/04/2026 24:01',
    '03/04/2026 13:00 pm',
    '03/04/2026',
    'yesterday',
    '10:00',
    '03 Foo 2026 10:00',
    '45000.5',
    '',
  ])('%j cannot be read, day first', (text) => {
    expect(readLocalTime(text, 'day first')).toBeNaN();
  });
});

describe('DateOrderTally', () => {
  const verdict = (...texts: string[]) => {
    const tally = new DateOrderTally();
    for (const text of texts) tally.add(text);
    return tally.verdict();
  };
  test('says what the dates say', () => {
    expect(verdict('13/01/2026 1:00')).toBe('day first');
    expect(verdict('1/13/2026 1:00', '1/2/2026 1:00')).toBe('month first');
    expect(verdict('1/2/2026 1:00')).toBe('ambiguous');
    expect(verdict('2026-01-02 1:00', '202601021000', 'x', '')).toBe('not needed');
    expect(verdict('13/01/2026 1:00', '01/13/2026 1:00')).toBe('mixed');
    expect(verdict('99/99/2026 1:00')).toBe('not needed');
  });
});
