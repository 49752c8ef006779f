import type { CareArea } from '../../../shared/api/sites.ts';
import { halfHourName } from '../../../shared/domain/clock-text.ts';
import { cellFigures } from '../../../shared/domain/plan-cells.ts';
import { bedsFault } from '../../../shared/domain/plan-faults.ts';
import { formatCount, formatDay } from '../../lib/format.ts';
import { figureText } from './figure-grid.ts';
import type { GridCell } from './figure-grid.ts';
import type { PlanDraft } from './plan-draft.ts';
import type { RequiredCell } from './required-cells.ts';

/** A cell of the plan for the grid: its figures, what is needed, what is wrong, what was there before, all in words. */
export function planCell({
  draft,
  area,
  halfHours,
  name,
  required,
  risk,
  timeZone,
}: {
  draft: PlanDraft;
  area: CareArea;
  /** Half hours of week that the cell stands for, in order of time. */
  halfHours: readonly number[];
  /** For instance "Acute, Late, Monday". */
  name: string;
  /** Undefined: nothing is to be said; null: it is not known yet. */
  required: RequiredCell | null | undefined;
  risk: number;
  timeZone: string;
}): GridCell {
  const now = draft.now[area.id];
  const base = draft.base[area.id];
  const figures = cellFigures(now, halfHours);
  const was = figureText(cellFigures(base, halfHours));
  const changed = halfHours.some((index) => now[index] !== base[index]);
  const wrong = halfHours.find((index) => bedsFault(area, now[index]) !== null);
  const fault = wrong === undefined ? null : bedsFault(area, now[wrong]);
  const missing = required && figures.low !== null ? required.beds - figures.low : 0;
  const noun = area.spaceKind;

  const told = [
    `${name}: ${figures.low === null ? 'no figure' : formatCount(figures.high ?? 0, noun).replace(/^\S+/, figureText(figures))} planned.`,
  ];
  if (halfHours.length > 1) {
    told.push(`${halfHourName(halfHours[0])} to ${halfHourName((halfHours[halfHours.length - 1] + 1) % 336)}.`);
  }
  if (fault !== null && wrong !== undefined) told.push(`${halfHourName(wrong)}: ${fault}`);
  if (required) {
    const on = formatDay(required.from, timeZone, 'short');
    told.push(
      `${formatCount(required.beds, noun)} needed at ${String(Math.round(risk * 100))} % risk on ${on}${required.dates > 1 ? `, the most of ${String(required.dates)} dates` : ''}${missing > 0 ? `: ${String(missing)} short` : ''}.`,
    );
    if (required.doNotExist > 0) told.push(`${String(required.doNotExist)} of them do not exist as bed spaces.`);
  } else if (required === null) told.push('What is needed is not known yet.');
  if (changed) told.push(`It was ${was === '' ? 'without a figure' : was} before your change.`);

  return {
    ...figures,
    note: required
      ? missing > 0
        ? `${String(missing)} short of ${String(required.beds)}`
        : `needs ${String(required.beds)}`
      : null,
    short: missing > 0,
    fault,
    changed,
    told: told.join(' '),
  };
}
