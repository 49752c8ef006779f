import { describe, expect, it } from 'vitest';
import { chanceInNights, formatChance, riskStep, riskWord, riskWords } from '../../../shared/domain/risk-word.ts';

// The bounds are the product's own (common practice, no source): 5, 25, 50 and 80 %.
describe('a chance in words and figures', () => {
  it.each([
    [0, '<1 %', 'Remote'],
    [0.00499, '<1 %', 'Remote'],
    [0.005, '1 %', 'Remote'],
    [0.0449, '4 %', 'Remote'],
    [0.045, '5 %', 'Unlikely'],
    [0.244, '24 %', 'Unlikely'],
    [0.245, '25 %', 'Possible'],
    [0.494, '49 %', 'Possible'],
    [0.495, '50 %', 'Likely'],
    [0.794, '79 %', 'Likely'],
    [0.795, '80 %', 'Very likely'],
    [0.994, '99 %', 'Very likely'],
    [0.995, '>99 %', 'Very likely'],
    [1, '>99 %', 'Very likely'],
  ])('%f is printed %s and called %s', (chance, printed, word) => {
    expect(formatChance(chance)).toBe(printed);
    expect(riskWord(chance)).toBe(word);
  });

  it('word and figure always agree, and neither goes down as the chance goes up', () => {
    const bounds = [0, 5, 25, 50, 80];
    let last = 0;
    for (let i = 0; i <= 10_000; i += 1) {
      const chance = i / 10_000;
      const step = riskStep(chance);
      const printed = formatChance(chance);
      const figure = printed === '<1 %' ? 0 : printed === '>99 %' ? 100 : Number(printed.replace(' %', ''));
      expect(step).toBe(bounds.filter((bound) => figure >= bound).length);
      expect(step).toBeGreaterThanOrEqual(last);
      expect(riskWord(chance)).toBe(riskWords[step - 1]);
      last = step;
    }
  });

  it('what is no chance is named', () => {
    for (const value of [-0.001, 1.001, NaN, Infinity]) expect(() => formatChance(value)).toThrow(RangeError);
  });

  it('says what a chance means over many nights, never more than the printed figure does', () => {
    for (let printed = 0; printed <= 100; printed += 1) {
      const words = chanceInNights(printed / 100);
      const about = /^about (\d) nights? in 10 like this one$/.exec(words);
      if (about) expect(Math.abs(Number(about[1]) - printed / 10)).toBeLessThanOrEqual(0.5);
      else if (printed < 50) expect([words, printed < 5]).toEqual(['fewer than 1 night in 20 like this one', true]);
      else expect([words, printed > 95]).toEqual(['more than 19 nights in 20 like this one', true]);
    }
  });
});
