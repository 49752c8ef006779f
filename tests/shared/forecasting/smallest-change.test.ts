import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { changeCells, riskLeft, smallestChange } from '../../../shared/forecasting/smallest-change.ts';
import type { SmallestChangeInput } from '../../../shared/forecasting/smallest-change.ts';
import { poissonPmf } from '../../../shared/stochastic/poisson.ts';
import { pmfExceedance } from '../../../shared/stochastic/pmf.ts';

const poisson = (mean: number) => Float64Array.from({ length: 80 }, (_, n) => poissonPmf(n, mean));

/** Two spans of three hours, one full hour at the start of each hour. */
function build(areas: { means: number[]; staffed: number; spaces: number; safeMinimum: number; bedStep: number }[]) {
  const hours = [0, 1, 2, 3, 4, 5].map((h) => h * 3600);
  return {
    hours,
    spans: [
      { from: 0, to: 3 * 3600 },
      { from: 3 * 3600, to: 6 * 3600 },
    ],
    areas: areas.map(({ means, staffed, ...area }) => ({
      ...area,
      laws: means.map(poisson),
      staffedBeds: [{ at: 0, beds: staffed }],
    })),
  } satisfies SmallestChangeInput;
}

const area = fc.record({
  means: fc.array(fc.double({ min: 1, max: 14, noNaN: true }), { minLength: 6, maxLength: 6 }),
  staffed: fc.integer({ min: 2, max: 12 }),
  spaces: fc.integer({ min: 4, max: 14 }),
  safeMinimum: fc.integer({ min: 0, max: 4 }),
  bedStep: fc.integer({ min: 1, max: 3 }),
});
const inputs = fc.array(area, { minLength: 1, maxLength: 2 }).map(build);

/** Every way to add steps within the spaces and at the safe minimum at least: bed-hours, and the chance of each area and span then. */
function everyWay({ hours, spans, areas }: SmallestChangeInput) {
  const cells = areas.flatMap((one, a) => spans.map((span, s) => ({ a, s, one, span })));
  const highest = ({ one, span }: (typeof cells)[number], beds: number) =>
    Math.max(
      ...hours.flatMap((at, h) =>
        span.from <= at && at < span.to ? [Math.min(1, pmfExceedance(one.laws[h], beds))] : [],
      ),
    );
  let ways: { bedHours: number; chances: number[] }[] = [{ bedHours: 0, chances: [] }];
  const floors: number[] = [];
  for (const cell of cells) {
    const { bedStep, spaces, safeMinimum, staffedBeds } = cell.one;
    const choices: number[] = [];
    for (let beds = staffedBeds[0].beds; beds === staffedBeds[0].beds || beds <= spaces; beds += bedStep)
      choices.push(beds);
    const safe = choices.filter((beds) => beds >= Math.min(safeMinimum, choices[choices.length - 1]));
    floors.push(highest(cell, choices[choices.length - 1]));
    ways = ways.flatMap((way) =>
      safe.map((beds) => ({
        bedHours: way.bedHours + ((beds - staffedBeds[0].beds) * (cell.span.to - cell.span.from)) / 3600,
        chances: [...way.chances, highest(cell, beds)],
      })),
    );
  }
  return { ways, floors };
}

describe('the smallest change, against every way there is', () => {
  it('takes the fewest bed-hours that meet a risk wherever the spaces allow it', () => {
    fc.assert(
      fc.property(inputs, fc.double({ min: 0.01, max: 0.6, noNaN: true }), (input, risk) => {
        const { ways, floors } = everyWay(input);
        const good = ways.filter(({ chances }) => chances.every((chance, i) => chance <= Math.max(risk, floors[i])));
        const found = smallestChange(changeCells(input), risk);
        expect(found.bedHours).toBeCloseTo(Math.min(...good.map(({ bedHours }) => bedHours)), 9);
        for (const { after, spacesEnd } of found.added) expect(after <= risk || spacesEnd).toBe(true);
      }),
      { numRuns: 150 },
    );
  });

  it('leaves the lowest risk that some bed-hours can buy, and takes no more of them than that needs', () => {
    fc.assert(
      fc.property(inputs, fc.integer({ min: 0, max: 40 }), (input, bedHours) => {
        const { ways, floors } = everyWay(input);
        const level = ({ chances }: (typeof ways)[number]) =>
          chances.reduce((worst, chance, i) => (chance > floors[i] ? Math.max(worst, chance) : worst), 0);
        const affordable = ways.filter((way) => way.bedHours <= bedHours + 1e-9);
        const found = riskLeft(changeCells(input), bedHours);
        if (affordable.length === 0) {
          expect(found).toBeNull();
          return;
        }
        const best = Math.min(...affordable.map(level));
        expect(found!.worstThatBedsCanChange).toBe(best);
        expect(found!.bedHours).toBeLessThanOrEqual(bedHours + 1e-9);
        const cheapest = Math.min(...affordable.filter((way) => level(way) === best).map((way) => way.bedHours));
        expect(found!.bedHours).toBeCloseTo(cheapest, 9);
      }),
      { numRuns: 150 },
    );
  });

  it('never takes a bed away, never leaves an area below its safe minimum if its spaces allow that, and never goes past them', () => {
    fc.assert(
      fc.property(inputs, fc.double({ min: 0, max: 1, noNaN: true }), (input, risk) => {
        for (const { area: a, beds } of smallestChange(changeCells(input), risk).added) {
          const { spaces, staffedBeds } = input.areas[a];
          expect(beds).toBeGreaterThanOrEqual(0);
          expect(staffedBeds[0].beds + beds).toBeLessThanOrEqual(Math.max(spaces, staffedBeds[0].beds));
        }
      }),
    );
  });

  it('more bed-hours never leave more risk, and a lower risk never takes fewer', () => {
    const cells = changeCells(
      build([{ means: [3, 5, 8, 9, 4, 2], staffed: 5, spaces: 14, safeMinimum: 4, bedStep: 1 }]),
    );
    const left = Array.from({ length: 40 }, (_, k) => riskLeft(cells, k)!.worst);
    expect([...left].sort((a, b) => b - a)).toEqual(left);
    const cost = Array.from({ length: 20 }, (_, i) => smallestChange(cells, (i + 1) / 20).bedHours);
    expect([...cost].sort((a, b) => b - a)).toEqual(cost);
  });
});

describe('one case by hand', () => {
  // P(Poisson(10) > 14) = 0.0835 and P(Poisson(10) > 13) = 0.1355: Haight (1967), Handbook of the Poisson Distribution, table of tails (from memory).
  it('adds four beds to ten for a mean of ten at a risk of 10 %', () => {
    const means = [10, 10, 10, 1, 1, 1];
    const cells = changeCells(build([{ means, staffed: 10, spaces: 20, safeMinimum: 4, bedStep: 1 }]));
    const { added, bedHours, worst } = smallestChange(cells, 0.1);
    expect(added).toHaveLength(1);
    expect(added[0]).toMatchObject({ area: 0, span: 0, beds: 4, bedHours: 12, spacesEnd: false });
    expect([bedHours, worst]).toEqual([12, added[0].after]);
    expect(added[0].after).toBeCloseTo(0.0835, 4);
  });

  it('says where the spaces end, and what remains then', () => {
    const means = [10, 10, 10, 1, 1, 1];
    const cells = changeCells(build([{ means, staffed: 10, spaces: 13, safeMinimum: 4, bedStep: 2 }]));
    const { added } = smallestChange(cells, 0.1);
    expect(added[0]).toMatchObject({ beds: 2, spacesEnd: true });
    expect(added[0].after).toBeGreaterThan(0.1);
  });

  it('raises an area to its safe minimum first, or says that the bed-hours are not enough for that', () => {
    const cells = changeCells(
      build([{ means: [1, 1, 1, 1, 1, 1], staffed: 3, spaces: 13, safeMinimum: 6, bedStep: 2 }]),
    );
    expect(smallestChange(cells, 1).added.map(({ beds }) => beds)).toEqual([4, 4]);
    expect(riskLeft(cells, 23)).toBeNull();
    expect(riskLeft(cells, 24)!.bedHours).toBe(24);
    expect(() => riskLeft(cells, -1)).toThrow(/bedHours/);
    expect(() => smallestChange(cells, NaN)).toThrow(/risk/);
  });
});
