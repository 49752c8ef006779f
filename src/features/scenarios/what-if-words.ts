import type { WhatIfBasis } from '../../../shared/api/scenarios.ts';
import { formatChance } from '../../../shared/domain/risk-word.ts';
import type { PlanPreview } from './preview-plan.ts';

/** Place and hour of the area that is furthest past its limit, or nearest to it. */
export function worstOf(basis: WhatIfBasis, preview: PlanPreview): { area: number; hour: number; chance: number } {
  let area = 0;
  preview.areas.forEach(({ worst }, a) => {
    const over = (of: number) => preview.areas[of].worst / basis.areas[of].alertLimit;
    if (worst > 0 && over(a) > over(area)) area = a;
  });
  return { area, hour: preview.areas[area].worstAt, chance: preview.areas[area].worst };
}

/** The page's first sentence: what the plan in hand does to the worst hour, or how the week stands. */
export function headline(basis: WhatIfBasis, asIs: PlanPreview, plan: PlanPreview | null): string {
  const highest = ({ areas }: PlanPreview) => Math.max(...areas.map(({ worst }) => worst));
  const printed = (chance: number) => formatChance(chance).replace(' ', '\u00a0');
  if (!plan) {
    const past = basis.areas.filter(({ alertLimit }, a) => asIs.areas[a].worst > alertLimit).length;
    return past === 0
      ? 'What if? As it stands, no hour of the week is past its limit.'
      : `What if? As it stands, ${past === 1 ? 'one area has' : `${String(past)} areas have`} hours past the limit.`;
  }
  const [before, after] = [highest(asIs), highest(plan)];
  if (printed(before) === printed(after)) return `With this plan the worst hour stays at ${printed(after)}.`;
  return `With this plan the worst hour ${after < before ? 'falls' : 'rises'} from ${printed(before)} to ${printed(after)}.`;
}
