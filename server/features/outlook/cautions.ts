import type { Caution, Outlook } from '../../../shared/api/outlooks.ts';
import type { Span } from '../../database/counting-spans.ts';
import { countCautions, groundCautions } from '../../database/ground-cautions.ts';
import type { NewestCensus } from '../../database/read-census.ts';

const hour = 3600;

/** What the cautions are judged by. */
export interface CautionFacts {
  now: number;
  outlook: Outlook;
  areas: { id: string; name: string }[];
  census: NewestCensus;
  /** Unusual days within the outlook, by name and date. */
  unusualDays: { date: string; name: string }[];
  /** The time that accepted logs speak for, ascending. */
  covered: readonly Span[];
  /** What the watch over the model's scores found, in words. */
  drift?: readonly string[];
}

/** The cautions of product and policy that are true now, gravest first. */
export function cautionsNow(facts: CautionFacts): Caution[] {
  const { now, outlook, areas, census, unusualDays, covered, drift = [] } = facts;
  const cautions: Caution[] = [];
  const ages = census.areas.map((area) => now - area.takenAt);
  if (ages.length === 0) {
    cautions.push({
      kind: 'without a census',
      text: 'Without a census: these figures are what the model expects at this hour, not what is there. Enter a census before you act.',
    });
  } else {
    const uncounted = areas.filter((area) => !census.areas.some((counted) => counted.areaId === area.id));
    if (uncounted.length > 0) {
      cautions.push({
        kind: 'area not counted',
        text: `Not counted: ${uncounted.map((area) => area.name).join(', ')}. What is printed for ${uncounted.length === 1 ? 'it' : 'them'} is what the model expects on such a night, not what is there. Count ${uncounted.length === 1 ? 'it' : 'them'} before you act.`,
      });
    }
    const oldest = Math.max(...ages);
    if (oldest > 2 * hour) {
      cautions.push({ kind: 'census old', text: `Census ${formatAge(oldest)} old. Enter a new one before you act.` });
    }
  }
  const unknown = areas.filter((area) => !outlook.result.areas.some((known) => known.areaId === area.id));
  if (unknown.length > 0) {
    cautions.push({
      kind: 'area not counted',
      text: `Not forecast: ${unknown.map((area) => area.name).join(', ')}. The model in use does not know ${unknown.length === 1 ? 'this area' : 'these areas'}. Fit a new one.`,
    });
  }
  for (const text of drift) cautions.push({ kind: 'model drifted', text });
  const { model } = outlook;
  if (model.weeksOfHistory < 8) {
    cautions.push({
      kind: 'little history',
      text: `Little history: ${String(Math.floor(model.weeksOfHistory))} weeks of visits. The forecast is coarse; trust 24 hours at most.`,
    });
  } else if (model.weeksOfHistory < 52) {
    cautions.push({
      kind: 'winter not seen yet',
      text: 'Less than a year of visits: not every season has been seen yet.',
    });
  }
  cautions.push(...countCautions(model.staysFrom), ...groundCautions(now, model.fittedAt, covered));
  for (const { date, name } of unusualDays) {
    cautions.push({ kind: 'unusual day', text: `${name} on ${date}: an unusual day, its range is wider.` });
  }
  return cautions;
}

/** An age in words: "2 h 10 min". */
export function formatAge(seconds: number): string {
  const minutes = Math.max(0, Math.round(seconds / 60));
  if (minutes < 60) return `${String(minutes)} min`;
  return `${String(Math.floor(minutes / 60))} h ${String(minutes % 60)} min`;
}
