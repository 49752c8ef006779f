import type { Caution, Outlook } from '../../../shared/api/outlooks.ts';
import type { NewestCensus } from '../../database/read-census.ts';

const hour = 3600;
const day = 86_400;

/** What the cautions are judged by. */
export interface CautionFacts {
  now: number;
  outlook: Outlook;
  areas: { id: string; name: string }[];
  census: NewestCensus;
  /** Unusual days within the outlook, by name and date. */
  unusualDays: { date: string; name: string }[];
  /** End of the newest accepted log's period, if any. */
  logTo: number | null;
}

/** The cautions of product and policy that are true now, gravest first. */
export function cautionsNow({ now, outlook, areas, census, unusualDays, logTo }: CautionFacts): Caution[] {
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
        text: `Not counted: ${uncounted.map((area) => area.name).join(', ')}. Nothing is said of ${uncounted.length === 1 ? 'it' : 'them'} until a count is entered.`,
      });
    }
    const oldest = Math.max(...ages);
    if (oldest > 2 * hour) {
      cautions.push({ kind: 'census old', text: `Census ${formatAge(oldest)} old. Enter a new one before you act.` });
    }
  }
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
  const modelAge = now - model.fittedAt;
  if (modelAge > 45 * day) {
    cautions.push({
      kind: 'model old',
      text: `The model was fitted ${String(Math.floor(modelAge / day))} days ago. Fit a new one.`,
    });
  }
  if (logTo !== null && now - logTo > 14 * day) {
    cautions.push({
      kind: 'gap in the log',
      text: `The newest visit log ends ${String(Math.floor((now - logTo) / day))} days ago: the level of arrivals since then is unknown.`,
    });
  }
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
