import { expect, test } from 'vitest';
import { periodOf } from '../../../shared/domain/log-period.ts';

const at = (text: string) => Date.parse(text) / 1000;

// Offsets from the IANA time zone data: London +01:00 in summer; Santiago's clocks skip midnight of 6 September 2026.
test.each([
  ['Europe/London', '2026-07-01T10:00:00Z', '2026-07-03T22:59:59Z', '2026-06-30T23:00:00Z', '2026-07-03T23:00:00Z'],
  ['Europe/London', '2026-10-24T23:30:00Z', '2026-10-25T23:30:00Z', '2026-10-24T23:00:00Z', '2026-10-26T00:00:00Z'],
  ['Asia/Kolkata', '2026-07-01T18:29:00Z', '2026-07-01T18:31:00Z', '2026-06-30T18:30:00Z', '2026-07-02T18:30:00Z'],
  ['America/Santiago', '2026-09-06T05:00:00Z', '2026-09-06T06:00:00Z', '2026-09-06T04:00:00Z', '2026-09-07T03:00:00Z'],
])('%s: whole local days', (timeZone, first, last, from, to) => {
  const report = { firstArrivalAt: at(first), lastArrivalAt: at(last) };
  expect(periodOf(report, timeZone, at('2027-01-01T00:00:00Z'))).toEqual({ from: at(from), to: at(to) });
});

test('the period ends when the extract was taken, but never before its last arrival', () => {
  const report = { firstArrivalAt: at('2026-07-01T10:00:00Z'), lastArrivalAt: at('2026-07-01T12:00:00Z') };
  expect(periodOf(report, 'Europe/London', at('2026-07-01T13:00:00Z'))?.to).toBe(at('2026-07-01T13:00:00Z'));
  expect(periodOf(report, 'Europe/London', at('2026-07-01T12:00:00Z'))?.to).toBe(at('2026-07-01T12:00:01Z'));
});

test('without a good row there is none', () => {
  expect(periodOf({ firstArrivalAt: null, lastArrivalAt: null }, 'Europe/London', 0)).toBeNull();
});
