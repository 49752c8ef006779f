import type { Chance, NeedByHour } from './outlook-types.ts';

/** Areas up to this many bed spaces print the chance of any shortfall within the hour. */
export const smallAreaSpaces = 8;

/**
 * The chance of shortfall that is printed for each hour of an area. In a small area one patient
 * more or less decides, so a figure at the full hour alone would miss most shortfalls: it prints
 * the chance of any shortfall within the hour that ends at the full hour. Others print the chance
 * at the full hour.
 */
export function printedShortfall(
  area: Pick<NeedByHour, 'shortfall' | 'shortfallWithin'>,
  spaces: number,
): readonly Chance[] {
  return spaces <= smallAreaSpaces ? area.shortfallWithin : area.shortfall;
}
