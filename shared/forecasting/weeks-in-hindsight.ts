import { dispositionCode, dispositions } from '../domain/disposition.ts';
import type { VisitTable } from './visit-table.ts';

/** What a week was, from the log. Figures are null where the log or the staffed beds do not speak for the whole week. */
export interface WeekFacts {
  /** UTC seconds. */
  from: number;
  to: number;
  arrivals: number | null;
  /** Of each area: full hours at which present exceeded staffed beds. */
  hoursShort: number[] | null;
  /** Full hours at which at least one area was short. */
  hoursAnyShort: number | null;
  /** Patient-hours of everyone present, and of those admitted and still in the department; null without decision times. */
  presentHours: number | null;
  boardingHours: number | null;
  /** Visits that arrived in the week by how they ended, in the order of dispositions, then those without one. */
  dispositions: number[] | null;
  /** Waits from arrival to a bed space: how many are known, and how many were longer than the limit; null without either. */
  waits: { known: number; tooLong: number } | null;
}

/** Share of admitted visits whose decision time must be known for boarding hours to be told. */
const enoughKnown = 0.9;

/**
 * Looks back at whole weeks. Present at a full hour is everyone who arrived at or before it and had not left; a visit
 * without a departure counts as present until the extract was taken or its longest stay has passed, or not at all where
 * the extract does not say what a missing departure means.
 * @param visits in any order; only those that arrived up to `capHours` before the first week matter
 * @param weeks ascending, without overlap, UTC seconds
 * @param spoken spans that the logs speak for from the first arrival that may still be present
 * @param stayUntil end of stay of a visit without a departure, by row; NaN: not counted
 * @param staffedAt staffed beds of an area at an instant; null where no plan is on record
 * @param waitLimitMinutes null: none is stated
 * Cost: linear in visits × hours of their stay.
 */
export function weeksInHindsight(input: {
  visits: VisitTable;
  weeks: readonly { from: number; to: number }[];
  areas: number;
  spoken: readonly { from: number; to: number }[];
  stayUntil: (row: number) => number;
  staffedAt: (area: number, at: number) => number | null;
  waitLimitMinutes: number | null;
}): WeekFacts[] {
  const { visits, weeks, areas, spoken, stayUntil, staffedAt, waitLimitMinutes } = input;
  const tallies = weeks.map(({ from, to }) => ({
    present: Array.from({ length: areas }, () => new Int32Array(Math.ceil((to - from) / 3600) + 1)),
    arrivals: 0,
    presentSeconds: 0,
    boardingSeconds: 0,
    admitted: 0,
    decided: 0,
    ends: new Array<number>(dispositions.length + 1).fill(0),
    waitsKnown: 0,
    waitsTooLong: 0,
  }));
  for (let row = 0; row < visits.length; row += 1) {
    const arrival = visits.arrivalAt[row];
    const departure = visits.departureAt[row];
    const end = Number.isNaN(departure) ? stayUntil(row) : departure;
    const code = visits.disposition[row];
    const decision = visits.admissionDecisionAt[row];
    const reach = Number.isNaN(end) ? arrival : end;
    for (let w = firstEndingAfter(weeks, arrival); w < weeks.length && weeks[w].from <= reach; w += 1) {
      const { from, to } = weeks[w];
      const tally = tallies[w];
      if (arrival >= from && arrival < to) {
        tally.arrivals += 1;
        tally.ends[code < dispositions.length ? code : dispositions.length] += 1;
        if (!Number.isNaN(visits.bedSpaceAt[row]) && waitLimitMinutes !== null) {
          tally.waitsKnown += 1;
          if (visits.bedSpaceAt[row] - arrival > waitLimitMinutes * 60) tally.waitsTooLong += 1;
        }
      }
      if (Number.isNaN(end)) continue;
      tally.presentSeconds += overlap(arrival, end, from, to);
      if (code === dispositionCode.admitted && end > from) {
        tally.admitted += 1;
        if (!Number.isNaN(decision)) {
          tally.decided += 1;
          tally.boardingSeconds += overlap(Math.max(arrival, decision), end, from, to);
        }
      }
      const hours = tally.present[visits.area[row]];
      const first = Math.max(0, Math.ceil((arrival - from) / 3600));
      const last = Math.min(hours.length - 1, Math.ceil((end - from) / 3600) - 1);
      for (let hour = first; hour <= last; hour += 1) hours[hour] += 1;
    }
  }
  return weeks.map(({ from, to }, w) => {
    const tally = tallies[w];
    if (!spoken.some((span) => span.from <= from && to <= span.to)) {
      const nothing = { hoursShort: null, hoursAnyShort: null, presentHours: null, boardingHours: null };
      return { from, to, arrivals: null, ...nothing, dispositions: null, waits: null };
    }
    let hoursShort: number[] | null = new Array<number>(areas).fill(0);
    let hoursAnyShort = 0;
    for (let at = from; at < to && hoursShort !== null; at += 3600) {
      let any = false;
      for (let area = 0; area < areas; area += 1) {
        const staffed = staffedAt(area, at);
        if (staffed === null) {
          hoursShort = null;
          break;
        }
        if (tally.present[area][(at - from) / 3600] > staffed) {
          hoursShort[area] += 1;
          any = true;
        }
      }
      if (any) hoursAnyShort += 1;
    }
    const boardingKnown = tally.admitted > 0 && tally.decided >= enoughKnown * tally.admitted;
    return {
      from,
      to,
      arrivals: tally.arrivals,
      hoursShort,
      hoursAnyShort: hoursShort === null ? null : hoursAnyShort,
      presentHours: tally.presentSeconds / 3600,
      boardingHours: boardingKnown ? tally.boardingSeconds / 3600 : null,
      dispositions: tally.ends,
      waits: tally.waitsKnown > 0 ? { known: tally.waitsKnown, tooLong: tally.waitsTooLong } : null,
    };
  });
}

/** The mean of a figure over the weeks that have it; null where fewer than `least` do. */
export function meanOfWeeks(
  weeks: readonly WeekFacts[],
  figure: (week: WeekFacts) => number | null,
  least: number,
): number | null {
  const known = weeks.map(figure).filter((value) => value !== null);
  return known.length < least ? null : known.reduce((sum, value) => sum + value, 0) / known.length;
}

function overlap(from: number, to: number, start: number, end: number): number {
  return Math.max(0, Math.min(to, end) - Math.max(from, start));
}

/** Index of the first week that ends after an instant. */
function firstEndingAfter(weeks: readonly { to: number }[], at: number): number {
  let low = 0;
  let high = weeks.length;
  while (low < high) {
    const middle = (low + high) >> 1;
    if (weeks[middle].to > at) high = middle;
    else low = middle + 1;
  }
  return low;
}
