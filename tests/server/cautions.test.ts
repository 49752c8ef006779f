import { describe, expect, test } from 'vitest';
import type { Outlook } from '../../shared/api/outlooks.ts';
import { cautionsNow, formatAge, type CautionFacts } from '../../server/features/outlook/cautions.ts';

const now = 1_790_000_000;
const hour = 3600;
const day = 86_400;
const counted = (areaId: string, age: number) => ({
  areaId,
  takenAt: now - age,
  present: 1,
  waiting: 0,
  boarding: 0,
  enteredBy: 'Test',
});

/** An outlook about which there is nothing to say, changed as a case wants it. */
function facts(model: Partial<Outlook['model']> = {}, more: Partial<CautionFacts> = {}): CautionFacts {
  const quiet = { id: 'm', fittedAt: now, approvedAt: now, trainedTo: now, weeksOfHistory: 60, ...model };
  return {
    now,
    outlook: { model: quiet, result: { areas: [{ areaId: 'a' }, { areaId: 'b' }] } } as Outlook,
    areas: [
      { id: 'a', name: 'Acute' },
      { id: 'b', name: 'Resuscitation' },
    ],
    census: { areas: [counted('a', 60), counted('b', 60)], undecided: null, arrivalsSinceMidnight: null },
    unusualDays: [],
    covered: [{ from: now - 400 * day, to: now }],
    ...more,
  };
}
const kinds = (input: CautionFacts) => cautionsNow(input).map(({ kind }) => kind);
const census = (...areas: ReturnType<typeof counted>[]) => ({ areas, undecided: null, arrivalsSinceMidnight: null });

// The limits are the product's own (its list of cautions): 2 h, 8 weeks, a year, 45 days; a log's end after 14 days.
describe('cautions', () => {
  test('are none when none is true', () => {
    expect(cautionsNow(facts())).toEqual([]);
  });

  test.each<[string, CautionFacts, string[]]>([
    ['a census of 2 h', facts({}, { census: census(counted('a', 2 * hour), counted('b', 0)) }), []],
    [
      'one older, by its oldest area',
      facts({}, { census: census(counted('a', 2 * hour + 1), counted('b', 0)) }),
      ['census old'],
    ],
    ['no census', facts({}, { census: census() }), ['without a census']],
    ['one area not counted', facts({}, { census: census(counted('a', 0)) }), ['area not counted']],
    ['8 weeks of history', facts({ weeksOfHistory: 8 }), ['winter not seen yet']],
    ['less', facts({ weeksOfHistory: 7.99 }), ['little history']],
    ['a year', facts({ weeksOfHistory: 52 }), []],
    ['less than a year', facts({ weeksOfHistory: 51.9 }), ['winter not seen yet']],
    ['a model of 45 days', facts({ fittedAt: now - 45 * day }), []],
    ['an older one', facts({ fittedAt: now - 45 * day - 1 }), ['model old']],
    ['a log that ended 14 days ago', facts({}, { covered: [{ from: 0, to: now - 14 * day }] }), []],
    ['one that ended before', facts({}, { covered: [{ from: 0, to: now - 14 * day - 1 }] }), ['gap in the log']],
    ['no log any more', facts({}, { covered: [] }), []],
  ])('%s', (_, input, expected) => {
    expect(kinds(input)).toEqual(expected);
  });

  test('a gap between logs counts within the last eight weeks, from a day on', () => {
    const withGap = (from: number, to: number) =>
      cautionsNow(
        facts(
          {},
          {
            covered: [
              { from: now - 400 * day, to: from },
              { from: to, to: now },
            ],
          },
        ),
      ).map(({ text }) => text);
    expect(withGap(now - 10 * day, now - 7 * day)).toEqual([
      'The visit logs leave out 3 days of the last 8 weeks: the level of arrivals is less certain.',
    ]);
    expect(withGap(now - 10 * day, now - 9 * day)).toEqual([expect.stringContaining('leave out 1 day of')]);
    expect(withGap(now - 10 * day, now - 9 * day - 1)).toEqual([]);
    expect(withGap(now - 70 * day, now - 60 * day)).toEqual([]);
    // Only what of it lies within the eight weeks.
    expect(withGap(now - 70 * day, now - 54 * day)).toEqual([expect.stringContaining('leave out 2 days of')]);
  });

  test('name the areas, days and ages that they are about', () => {
    const texts = cautionsNow(
      facts(
        { weeksOfHistory: 7.9, fittedAt: now - 50 * day },
        {
          areas: ['Acute', 'Resuscitation', 'Children'].map((name, index) => ({ id: 'abc'[index], name })),
          census: census(counted('a', 3 * hour)),
          unusualDays: [{ date: '2026-12-25', name: 'Christmas Day' }],
        },
      ),
    ).map(({ text }) => text);
    expect(texts).toEqual([
      'Not counted: Resuscitation, Children. What is printed for them is what the model expects on such a night, not what is there. Count them before you act.',
      'Census 3 h 0 min old. Enter a new one before you act.',
      'Not forecast: Children. The model in use does not know this area. Fit a new one.',
      'Little history: 7 weeks of visits. The forecast is coarse; trust 24 hours at most.',
      'The model was fitted 50 days ago. Fit a new one.',
      'Christmas Day on 2026-12-25: an unusual day, its range is wider.',
    ]);
  });
});

test.each([
  [0, '0 min'],
  [-5, '0 min'],
  [89, '1 min'],
  [59 * 60 + 29, '59 min'],
  [59 * 60 + 30, '1 h 0 min'],
  [7261, '2 h 1 min'],
])('an age of %i s is "%s"', (seconds, expected) => {
  expect(formatAge(seconds)).toBe(expected);
});
