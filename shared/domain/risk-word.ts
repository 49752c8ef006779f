/** The words for a chance of shortfall. The bounds are whole per cents as printed. */
export const riskWords = ['Remote', 'Unlikely', 'Possible', 'Likely', 'Very likely'] as const;
export type RiskWord = (typeof riskWords)[number];

/** Five steps, 1 (remote) to 5 (very likely). */
export type RiskStep = 1 | 2 | 3 | 4 | 5;

/** A chance as it is printed: whole per cent, "<1 %" under a half, ">99 %" from 99.5. */
export function formatChance(chance: number): string {
  if (!(chance >= 0 && chance <= 1)) throw new RangeError(`chance must lie in 0..1, got ${String(chance)}`);
  if (chance < 0.005) return '<1 %';
  if (chance >= 0.995) return '>99 %';
  return `${String(Math.round(chance * 100))} %`;
}

/** The step of a chance; it follows from the printed figure, so that word and number agree. */
export function riskStep(chance: number): RiskStep {
  const printed = Math.round(chance * 100);
  if (printed >= 80) return 5;
  if (printed >= 50) return 4;
  if (printed >= 25) return 3;
  if (printed >= 5) return 2;
  return 1;
}

/** The word for a chance. */
export function riskWord(chance: number): RiskWord {
  return riskWords[riskStep(chance) - 1];
}

/** What a chance means over many nights like this one; it follows from the printed figure. */
export function chanceInNights(chance: number): string {
  const printed = Math.round(chance * 100);
  if (printed < 5) return 'fewer than 1 night in 20 like this one';
  if (printed > 95) return 'more than 19 nights in 20 like this one';
  const nights = Math.max(1, Math.min(9, Math.round(printed / 10)));
  return `about ${String(nights)} ${nights === 1 ? 'night' : 'nights'} in 10 like this one`;
}
