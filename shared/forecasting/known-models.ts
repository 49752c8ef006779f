import { instantOfLocal } from '../domain/shift-times.ts';
import type { Zone } from '../domain/zoned-time.ts';
import type { ArrivalModel, ArrivalSettings, HourlyCounts } from './arrival-model.ts';
import { countHourly } from './count-hourly.ts';
import { firstHours } from './first-hours.ts';
import { fitArrivals } from './fit-arrivals.ts';
import { fitStays } from './fit-stays.ts';
import { knownAt } from './known-visits.ts';
import { refreshLevel } from './refresh-level.ts';
import type { StayModel } from './stay-model.ts';
import type { CalendarDay, ExposureGap, ExtractFacts, VisitTable } from './visit-table.ts';

interface LoggedVisits {
  visits: VisitTable;
  /** The time that the logs cover, UTC seconds. */
  fromUtc: number;
  toUtc: number;
  gaps: readonly ExposureGap[];
}

/** A fitted model, as it was approved or made a candidate, and the visits that it is tried on. */
export interface ComparedModel extends LoggedVisits {
  arrival: ArrivalModel;
  stay: StayModel;
  /** Areas in the model's own order, which its visits are numbered in. */
  areas: number;
  /** What it was fitted on. */
  own: LoggedVisits & { facts: ExtractFacts };
}

export interface KnownModelsAt {
  arrivalAt: (origin: number, week: number) => ArrivalModel;
  stayAt: (origin: number, week: number) => StayModel;
}

const weeksPerChoice = 13;
const weeksPerStayFit = 4;

/** Weeks of a model's own visits that lie before a local hour. */
export function weeksBefore({ own }: ComparedModel, localHour: number, zone: Zone): number {
  return (localHour - zone.toLocal(own.fromUtc) / 3600) / 168;
}

/**
 * What a model would have known at the start of a week, past data only. After the end of its visits it is itself, its level
 * moved on by what came since. Before, it is the fit that its method would have made then on its own visits: settings chosen
 * anew every 13 weeks, stays fitted every 4, as in the evaluation; never the fit that has seen the weeks to come.
 * Answers are kept. @param counts all visits of the site, in the model's order of areas; `origin` counts hours into them
 */
export function makeKnownModels(
  model: ComparedModel,
  counts: HourlyCounts,
  zone: Zone,
  calendar: readonly CalendarDay[],
  capHours: number,
): KnownModelsAt {
  const { arrival, stay, areas, own } = model;
  const ownCounts = countHourly(own.visits, areas, zone, own.fromUtc, own.toUtc, own.gaps);
  const settings = new Map<number, ArrivalSettings>();
  const arrivals = new Map<number, ArrivalModel>();
  const stays = new Map<number, StayModel>();
  const isItself = (origin: number): boolean => counts.firstLocalHour + origin >= arrival.endLocalHour;

  function fitAt(origin: number, week: number): ArrivalModel {
    const past = firstHours(ownCounts, counts.firstLocalHour + origin - ownCounts.firstLocalHour);
    const choice = Math.floor(week / weeksPerChoice);
    const chosen = settings.get(choice);
    const fitted = fitArrivals({ counts: past, calendar, ...(chosen ? { settings: chosen } : {}) });
    if (!chosen) settings.set(choice, fitted.settings);
    return fitted;
  }

  function fitStayAt(origin: number): StayModel {
    const at = instantOfLocal(zone, (counts.firstLocalHour + origin) * 3600);
    return fitStays({
      visits: knownAt(own.visits, at),
      areas,
      zone,
      window: { from: own.fromUtc, to: at },
      facts: { ...own.facts, takenAt: at, missingDeparture: 'still present' },
      capHours,
      gaps: own.gaps.filter(({ from }) => from < at).map((gap) => ({ ...gap, to: Math.min(gap.to, at) })),
      calendar,
    });
  }

  return {
    arrivalAt(origin, week) {
      const kept = arrivals.get(origin);
      if (kept) return kept;
      const made = isItself(origin) ? refreshLevel(arrival, firstHours(counts, origin)) : fitAt(origin, week);
      arrivals.set(origin, made);
      return made;
    },
    stayAt(origin, week) {
      if (isItself(origin)) return stay;
      const choice = Math.floor(week / weeksPerStayFit);
      const kept = stays.get(choice) ?? fitStayAt(origin);
      stays.set(choice, kept);
      return kept;
    },
  };
}
