import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { countingSpans } from '../../server/database/counting-spans.ts';

const log = (number: number, periodFrom: number, periodTo: number) => ({ number, periodFrom, periodTo });

describe('countingSpans', () => {
  test('a newer log in the middle cuts an older one in two', () => {
    expect(countingSpans([log(1, 0, 100), log(2, 40, 60)])).toEqual(
      new Map([
        [2, [{ from: 40, to: 60 }]],
        [
          1,
          [
            { from: 0, to: 40 },
            { from: 60, to: 100 },
          ],
        ],
      ]),
    );
  });

  test('a newer log that covers the whole period leaves nothing', () => {
    expect(countingSpans([log(2, 0, 100), log(1, 20, 30)]).get(1)).toEqual([]);
  });

  // The definition itself, instant by instant: an instant counts for the newest log whose period holds it.
  test('agrees with the definition for any logs', () => {
    const anyLog = fc.tuple(fc.integer({ min: 0, max: 40 }), fc.integer({ min: 1, max: 20 }));
    fc.assert(
      fc.property(fc.array(anyLog, { maxLength: 8 }), (drawn) => {
        const logs = drawn.map(([from, length], index) => log(index + 1, from, from + length));
        const spans = countingSpans(logs);
        for (let at = 0; at < 62; at += 1) {
          const newest = logs.filter((one) => one.periodFrom <= at && at < one.periodTo).at(-1)?.number ?? null;
          const counting = logs.filter((one) => spans.get(one.number)?.some((span) => span.from <= at && at < span.to));
          expect(counting.map((one) => one.number)).toEqual(newest === null ? [] : [newest]);
        }
      }),
    );
  });
});
