import type { Site } from '../../../shared/api/sites.ts';
import { cellFigures, planCells } from '../../../shared/domain/plan-cells.ts';
import { formatCount, weekdayName } from '../../lib/format.ts';
import type { Planned } from './plan-draft.ts';
import { cellKey, type RequiredCell } from './required-cells.ts';

/** The plan in one sentence: the cell that is furthest below what is needed, and how many others are. */
export function planSentence(
  site: Pick<Site, 'areas' | 'shifts'>,
  planned: Planned,
  required: ReadonlyMap<string, RequiredCell> | null,
): string {
  if (required === null || required.size === 0) return 'Staffed beds; what is needed is not known yet';
  let worst: { short: number; name: string; noun: string } | null = null;
  let short = 0;
  for (const area of site.areas) {
    for (const { shift, days } of planCells(site.shifts)) {
      for (const [day, halfHours] of days.entries()) {
        const need = required.get(cellKey(area.id, shift.name, day));
        const { low } = cellFigures(planned[area.id] ?? [], halfHours);
        if (!need || low === null || need.beds <= low) continue;
        short += 1;
        if (worst && worst.short >= need.beds - low) continue;
        const name = `${area.name} on ${weekdayName(day + 1)} ${shift.name}`;
        worst = { short: need.beds - low, name, noun: area.spaceKind };
      }
    }
  }
  if (!worst) return 'Every shift has the beds that it needs at the planning risk';
  const others = short === 1 ? '' : `; ${formatCount(short - 1, 'other shift')} short`;
  return `${worst.name} is ${formatCount(worst.short, worst.noun)} short${others}`;
}
