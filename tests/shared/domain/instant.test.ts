import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { formatInstant, parseInstant } from '../../../shared/domain/instant.ts';

describe('parseInstant', () => {
  // Against the language's own Date, which implements the same standard (ECMA-262, date time string format).
  test('agrees with Date on every instant of this century, with any offset', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 946_684_800, max: 4_102_444_799 }),
        fc.integer({ min: -14 * 60, max: 14 * 60 }),
        (at, offset) => {
          const local = new Date((at + offset * 60) * 1000).toISOString().slice(0, 19);
          const size = Math.abs(offset);
          const two = (value: number) => String(value).padStart(2, '0');
          const text = `${local}${offset < 0 ? '-' : '+'}${two(Math.floor(size / 60))}:${two(size % 60)}`;
          expect(parseInstant(text)).toBe(Date.parse(text) / 1000);
          expect(parseInstant(text)).toBe(at);
          expect(parseInstant(formatInstant(at))).toBe(at);
        },
      ),
    );
  });

  test.each([
    ['2026-09-21T13:33Z', 1_789_997_580],
    ['2026-09-21 14:13:20.987+0000', 1_790_000_000],
    ['2026-09-21T16:13:20+02', 1_790_000_000],
    ['2024-02-29T00:00:00Z', 1_709_164_800],
  ])('%s', (text, at) => {
    expect(parseInstant(text)).toBe(at);
  });

  test.each([
    '2026-09-21T13:33:20',
    '2026-09-21',
    '2026-02-29T10:00:00Z',
    '2100-02-29T10:00:00Z',
    '2026-13-01T10:00:00Z',
    '2026-09-21T24:00:00Z',
    '2026-09-21T13:60:00Z',
    '2026-09-21T13:33:20+15:00',
    '2026-09-21T13:33:20Zulu',
    '2026-09-21T13:33:20.Z',
    '21/09/2026 13:33:20Z',
    '1790000000',
    '',
  ])('%j is no instant', (text) => {
    expect(parseInstant(text)).toBeNaN();
  });
});
