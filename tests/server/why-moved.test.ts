import { describe, expect, test } from 'vitest';
import type { Outlook } from '../../shared/api/outlooks.ts';
import { whyMoved } from '../../server/features/outlook/why-moved.ts';

const issuedAt = Date.parse('2026-09-21T14:13:20Z') / 1000;
const hours = ['2026-09-21T15:00Z', '2026-09-21T16:00Z', '2026-09-21T17:00Z'].map((text) => Date.parse(text) / 1000);
const names = new Map([
  ['a', 'Acute'],
  ['b', 'Children'],
]);

interface Case {
  issuedAt?: number;
  hours?: number[];
  a?: number[];
  b?: number[];
  uncounted?: string;
  present?: number;
  takenAt?: number;
  beds?: { at: number; beds: number }[];
  model?: string;
  arrivals?: number;
}

function outlook(given: Case = {}): Outlook {
  const area = (areaId: string, chances: number[]) => ({
    areaId,
    counted: given.uncounted !== areaId,
    shortfall: chances.map((chance) => ({ chance, se: 0 })),
  });
  const { present = 5, takenAt = issuedAt } = given;
  return {
    issuedAt: given.issuedAt ?? issuedAt,
    census: [
      { areaId: 'a', takenAt, present, waiting: 0, boarding: 1 },
      { areaId: 'b', takenAt: null, present: null, waiting: null, boarding: null },
    ],
    staffedBeds: [
      { areaId: 'a', steps: given.beds ?? [{ at: issuedAt - 60, beds: 10 }] },
      { areaId: 'b', steps: [{ at: issuedAt - 60, beds: 4 }] },
    ],
    model: { id: given.model ?? 'first' },
    result: {
      hours: given.hours ?? hours,
      areas: [area('a', given.a ?? [0.1, 0.1, 0.1]), area('b', given.b ?? [0.2, 0.2, 0.2])],
      arrivalsSoFar: given.arrivals === undefined ? null : { counted: given.arrivals },
    },
  } as Outlook;
}
const why = (newer: Case, older: Case = {}) => whyMoved(outlook(newer), outlook(older), names, 'Europe/London');

describe('why an outlook moved', () => {
  test('is not said below five points', () => {
    expect(why({})).toBeNull();
    expect(why({ a: [0.1, 0.149, 0.1], present: 9 })).toBeNull();
    expect(why({ a: [0.1, 0.151, 0.1], present: 9 })).not.toBeNull();
  });

  test('names the area and local hour that moved most, up or down', () => {
    expect(why({ a: [0.1, 0.3, 0.1], b: [0.2, 0.2, 0.7] })).toBe(
      'Children at 18:00 moved from 20 % to 70 % since the last outlook: time has passed.',
    );
    expect(why({ a: [0.1, 0.2, 0.1], b: [0, 0.2, 0.2] })).toBe(
      'Children at 16:00 moved from 20 % to <1 % since the last outlook: time has passed.',
    );
  });

  test('compares the same hour, not the same place in the list', () => {
    const later = { issuedAt: issuedAt + 3600, hours: [...hours.slice(1), hours[2] + 3600], a: [0.5, 0.9, 0.9] };
    expect(why(later, { a: [0.9, 0.5, 0.9] })).toBeNull();
    expect(why({ ...later, hours: [hours[2] + 3600, hours[2] + 7200, hours[2] + 10_800] })).toBeNull();
  });

  test('says nothing of an area that one of the two did not count', () => {
    expect(why({ a: [0.9, 0.9, 0.9], uncounted: 'a' })).toBeNull();
    expect(why({ a: [0.9, 0.9, 0.9] }, { uncounted: 'a' })).toBeNull();
  });

  test.each<[string, Case, Case, string]>([
    ['a new count', { present: 9 }, {}, 'Acute was counted again (5 to 9 present)'],
    ['the same count again', { takenAt: issuedAt + 5 }, {}, 'Acute was counted again'],
    ['other beds', { beds: [{ at: issuedAt - 60, beds: 8 }] }, {}, 'its staffed beds were changed'],
    ['another model', { model: 'second' }, {}, 'another model is in use'],
    ['arrivals', { arrivals: 40 }, {}, 'arrivals were counted'],
    ['more arrivals', { arrivals: 41 }, { arrivals: 40 }, 'arrivals were counted'],
    ['no more arrivals', { arrivals: 40 }, { arrivals: 40 }, 'time has passed'],
    [
      'all of it',
      { present: 9, beds: [{ at: issuedAt, beds: 8 }], model: 'second', arrivals: 3 },
      {},
      'Acute was counted again (5 to 9 present), its staffed beds were changed, another model is in use, arrivals were counted',
    ],
  ])('%s', (_, newer, older, reasons) => {
    expect(why({ ...newer, a: [0.5, 0.1, 0.1] }, older)).toBe(
      `Acute at 16:00 moved from 10 % to 50 % since the last outlook: ${reasons}.`,
    );
  });

  test('a step of the plan that has passed is no change of staffed beds', () => {
    const before = [
      { at: issuedAt - 60, beds: 10 },
      { at: issuedAt + 600, beds: 8 },
    ];
    const newer = { issuedAt: issuedAt + 900, beds: [{ at: issuedAt + 900, beds: 8 }], a: [0.5, 0.1, 0.1] };
    expect(why(newer, { beds: before })).toContain('time has passed');
  });
});
