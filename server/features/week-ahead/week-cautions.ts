import type { Caution } from '../../../shared/api/outlooks.ts';
import type { WeekOutlook } from '../../../shared/api/week-outlooks.ts';
import type { Span } from '../../database/counting-spans.ts';
import { countCautions, groundCautions } from '../../database/ground-cautions.ts';

const hour = 3600;

/** What the cautions are judged by. */
export interface WeekCautionFacts {
  now: number;
  outlook: WeekOutlook;
  /** Care areas of the site now. */
  areas: { id: string; name: string }[];
  /** The time that accepted logs speak for, ascending. */
  covered: readonly Span[];
  /** What the watch over the model's scores found, in words. */
  drift?: readonly string[];
}

const names = (areas: readonly { name: string }[]): string => areas.map(({ name }) => name).join(', ');

/** The cautions that are true of a week outlook now, gravest first. */
export function weekCautions({ now, outlook, areas, covered, drift = [] }: WeekCautionFacts): Caution[] {
  const cautions: Caution[] = [];
  const { result, model } = outlook;
  const unknown = areas.filter((area) => !result.areas.some(({ areaId }) => areaId === area.id));
  if (unknown.length > 0) {
    cautions.push({
      kind: 'area not counted',
      text: `Not forecast: ${names(unknown)}. The model in use does not know ${unknown.length === 1 ? 'this area' : 'these areas'}. Fit a new one.`,
    });
  }
  const uncounted = areas.filter((area) => result.areas.some(({ areaId, counted }) => areaId === area.id && !counted));
  if (uncounted.length > 0) {
    const all = uncounted.length === result.areas.length;
    cautions.push({
      kind: 'without a census',
      text: `Begun without a census${all ? '' : ` of ${names(uncounted)}`}: the first day starts from what the model expects, not from what was there. Later days are hardly touched by it.`,
    });
  }
  for (const text of drift) cautions.push({ kind: 'model drifted', text });
  const ageHours = (now - outlook.issuedAt) / hour;
  if (ageHours > 30) {
    cautions.push({
      kind: 'model old',
      text: `Computed ${String(Math.floor(ageHours))} h ago and not since: an administrator can see under jobs why.`,
    });
  }
  if (model.weeksOfHistory < 52) {
    cautions.push({
      kind: 'winter not seen yet',
      text: 'Less than a year of visits: not every season has been seen yet.',
    });
  }
  cautions.push(...countCautions(model.staysFrom), ...groundCautions(now, model.fittedAt, covered));
  for (const { name, date, basis, to } of result.calendar) {
    if (basis === 'learned' || to <= now) continue;
    const known = basis === 'stated' ? 'its range is the one your site stated' : 'its range is a guess';
    cautions.push({ kind: 'unusual day', text: `${name} on ${date}: unlike any day in the log, ${known}.` });
  }
  return cautions;
}
