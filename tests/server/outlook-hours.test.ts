import { describe, expect, test } from 'vitest';
import { makeZone } from '../../shared/domain/zoned-time.ts';
import { fullHoursAfter } from '../../server/database/read-need-input.ts';

const utc = (text: string) => Date.parse(text) / 1000;
const written = (at: number) => new Date(at * 1000).toISOString().slice(11, 16);

describe('the full local hours after an instant', () => {
  test('begin after it, never at it', () => {
    const zone = makeZone('Europe/London');
    expect(fullHoursAfter(zone, utc('2026-01-14T20:10:01Z'), 3).map(written)).toEqual(['21:00', '22:00', '23:00']);
    expect(fullHoursAfter(zone, utc('2026-01-14T21:00:00Z'), 1).map(written)).toEqual(['22:00']);
  });

  test('lie at half past in UTC where the zone does', () => {
    const zone = makeZone('Asia/Kolkata');
    expect(fullHoursAfter(zone, utc('2026-01-14T20:10:00Z'), 2).map(written)).toEqual(['20:30', '21:30']);
  });

  // Clock changes: see tests/shared/domain/shift-times.test.ts for their sources.
  test.each([
    ['Europe/London, hour repeated', 'Europe/London', '2026-10-24T22:30Z'],
    ['Europe/London, hour skipped', 'Europe/London', '2027-03-27T22:30Z'],
    ['Lord Howe, half hour repeated', 'Australia/Lord_Howe', '2026-04-04T11:40Z'],
    ['Lord Howe, half hour skipped', 'Australia/Lord_Howe', '2026-10-03T11:40Z'],
    ['Lord Howe, within the change', 'Australia/Lord_Howe', '2026-04-04T15:10Z'],
  ])('are all there and nothing else, through a clock change: %s', (_, name, from) => {
    const zone = makeZone(name);
    const hours = fullHoursAfter(zone, utc(from), 36);
    // Every instant at which the clock on the wall shows a full hour, looked for minute by minute.
    const expected: number[] = [];
    for (let at = utc(from) + 60; expected.length < 36; at += 60) if (zone.toLocal(at) % 3600 === 0) expected.push(at);
    expect(hours.map(written)).toEqual(expected.map(written));
  });
});
