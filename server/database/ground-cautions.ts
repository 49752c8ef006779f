import type { Caution } from '../../shared/api/outlooks.ts';
import type { ArrivalModelRow } from '../entities/ArrivalModelRow.ts';
import type { Span } from './counting-spans.ts';
import { gapsBetween } from './covered-spans.ts';

const day = 86_400;
/** What the level of arrivals rests on most. */
const recentWeeks = 8;

/**
 * What is to be said of the grounds of any forecast: an old model, logs that ended long ago, days that they leave out.
 * @param fittedAt when the model was fitted, UTC seconds
 * @param covered the time that accepted logs speak for, ascending
 */
export function groundCautions(now: number, fittedAt: number, covered: readonly Span[]): Caution[] {
  const cautions: Caution[] = [];
  const modelAge = now - fittedAt;
  if (modelAge > 45 * day) {
    cautions.push({
      kind: 'model old',
      text: `The model was fitted ${String(Math.floor(modelAge / day))} days ago. Fit a new one.`,
    });
  }
  const logTo = covered.at(-1)?.to;
  if (logTo !== undefined && now - logTo > 14 * day) {
    cautions.push({
      kind: 'gap in the log',
      text: `The newest visit log ends ${String(Math.floor((now - logTo) / day))} days ago: the level of arrivals since then is unknown.`,
    });
  }
  const missing = gapsBetween(covered)
    .map((gap) => Math.max(0, gap.to - Math.max(gap.from, now - recentWeeks * 7 * day)))
    .filter((length) => length >= day)
    .reduce((sum, length) => sum + length, 0);
  if (missing > 0) {
    const days = Math.floor(missing / day);
    cautions.push({
      kind: 'gap in the log',
      text: `The visit logs leave out ${String(days)} ${days === 1 ? 'day' : 'days'} of the last ${String(recentWeeks)} weeks: the level of arrivals is less certain.`,
    });
  }
  return cautions;
}

/**
 * What a model fitted on hourly counts cannot know; nothing of one fitted on visits.
 * @param staysFrom where its lengths of stay come from
 */
export function countCautions(staysFrom: ArrivalModelRow['staysFrom'] | undefined): Caution[] {
  if (!staysFrom) return [];
  const pace =
    staysFrom === 'stated mean' ? '' : ', and the pace of leaving through the day is that of the counted departures';
  return [
    {
      kind: 'hourly counts',
      text: `Fitted on hourly counts: mean stays are stated by the site, not measured${pace}. Admissions are not forecast, and every patient of an area is taken to leave at the same pace, boarding patients too.`,
    },
  ];
}
