import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { suppressAverage, suppressSmall } from '../../../shared/domain/suppress-small.ts';

/*
 * The rule is the product's own (a minimum count, with a second cell kept back); that a single suppressed cell is recovered by
 * subtraction is the textbook case of Cox, JASA 75 (1980), 377-385 (cited from memory). The attacker below is exhaustive: it
 * knows the rule and tries every row.
 */
const row = fc.array(fc.integer({ min: 0, max: 60 }), { minLength: 1, maxLength: 7 });
const minimum = fc.integer({ min: 2, max: 12 });

describe('counts below the minimum', () => {
  test('never show', () => {
    fc.assert(
      fc.property(row, minimum, (counts, least) => {
        for (const count of suppressSmall(counts, least).counts) expect(count === null || count >= least).toBe(true);
      }),
    );
  });

  test('what shows is unchanged and in its place, and the total is the sum', () => {
    fc.assert(
      fc.property(row, minimum, (counts, least) => {
        const shown = suppressSmall(counts, least);
        shown.counts.forEach((count, index) => expect([null, counts[index]]).toContain(count));
        expect([null, counts.reduce((sum, count) => sum + count, 0)]).toContain(shown.total);
      }),
    );
  });

  test('with a total shown, never one alone, and never so few that their sum is small itself', () => {
    fc.assert(
      fc.property(row, minimum, (counts, least) => {
        const { counts: shown, total } = suppressSmall(counts, least);
        const hidden = counts.filter((_, index) => shown[index] === null);
        if (hidden.length === 0 || total === null) return;
        expect(hidden.length).toBeGreaterThanOrEqual(2);
        expect(hidden.reduce((sum, count) => sum + count, 0)).toBeGreaterThanOrEqual(least);
      }),
    );
  });

  test('nothing is kept back where nothing is small', () => {
    expect(suppressSmall([5, 9, 40], 5)).toEqual({ counts: [5, 9, 40], total: 54 });
  });

  test('the smallest of the others is the second cell', () => {
    expect(suppressSmall([500, 3, 120, 12], 5)).toEqual({ counts: [500, null, 120, null], total: 635 });
  });

  test('a nought is kept back like any small count', () => {
    expect(suppressSmall([30, 0, 20], 5)).toEqual({ counts: [30, null, null], total: 50 });
  });

  test('where too few people remain, the total is kept back too', () => {
    expect(suppressSmall([3], 5)).toEqual({ counts: [null], total: null });
    expect(suppressSmall([1, 2], 5)).toEqual({ counts: [null, null], total: null });
  });

  test.each([[[1.5]], [[-1]], [[NaN]]])('%j is refused', (counts) => {
    expect(() => suppressSmall(counts, 5)).toThrow(RangeError);
  });
});

test('who knows the rule and the total cannot recover one count: every row of three counts to 12 and of four to 7', () => {
  for (const [cells, most, least] of [
    [3, 12, 5],
    [4, 7, 3],
  ] as const) {
    const rows: number[][] = [[]];
    for (let cell = 0; cell < cells; cell += 1) {
      const longer = rows.flatMap((start) => Array.from({ length: most + least + 2 }, (_, count) => [...start, count]));
      rows.splice(0, rows.length, ...longer);
    }
    // Everything that could have been published, with the values that each kept-back count may then have.
    const possible = new Map<string, Set<number>[]>();
    for (const counts of rows) {
      const published = JSON.stringify(suppressSmall(counts, least));
      const values = possible.get(published) ?? counts.map(() => new Set<number>());
      counts.forEach((count, index) => values[index].add(count));
      possible.set(published, values);
    }
    for (const counts of rows) {
      if (Math.max(...counts) > most) continue;
      const shown = suppressSmall(counts, least);
      const values = possible.get(JSON.stringify(shown));
      shown.counts.forEach((count, index) => {
        if (count === null) expect(values?.[index].size, JSON.stringify({ counts, shown })).toBeGreaterThan(1);
      });
    }
  }
});

test('averages are whole, and kept back below the minimum', () => {
  expect(suppressAverage(12.4, 5)).toBe(12);
  expect(suppressAverage(4.4, 5)).toBeNull();
  // Two averages over four weeks that share three: the one week between them stays unknown to several counts.
  const byWeek = new Set<number>();
  for (let week = 0; week <= 4; week += 1) if (suppressAverage((40 + 38 + 44 + week) / 4, 5) === 31) byWeek.add(week);
  expect(byWeek.size).toBeGreaterThan(1);
});
