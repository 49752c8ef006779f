import { dispositionCode } from '../domain/disposition.ts';
import type { AreaCensus } from './outlook-types.ts';
import type { VisitTable } from './visit-table.ts';

/** What a log says of who was there: the truth that need is scored against, and a census at any instant. */
export interface PresentByHour {
  /** Everyone in each area's care at an instant. */
  presentAt(at: number): number[];
  /** A census of each area at an instant, as it would have been counted. */
  censusAt(at: number): AreaCensus[];
}

/**
 * Answers from a log who was present at an instant: arrived at or before it, not departed by then. A visit without a
 * departure counts as present until `capHours` after its arrival. Waiting and boarding need bed-space and
 * admission-decision times; without them they are 0.
 * Cost: sorting the visits once; an answer looks at the visits of the last `capHours`.
 */
export function presentByHour(visits: VisitTable, areas: number, capHours: number): PresentByHour {
  const order = Array.from({ length: visits.length }, (_, i) => i).sort(
    (a, b) => visits.arrivalAt[a] - visits.arrivalAt[b],
  );
  const arrivals = Float64Array.from(order, (i) => visits.arrivalAt[i]);
  const firstAfter = (at: number): number => {
    let low = 0;
    let high = arrivals.length;
    while (low < high) {
      const middle = (low + high) >> 1;
      if (arrivals[middle] > at) high = middle;
      else low = middle + 1;
    }
    return low;
  };
  function forEachPresent(at: number, use: (visit: number) => void): void {
    const to = firstAfter(at);
    for (let k = firstAfter(at - capHours * 3600); k < to; k += 1) {
      const departure = visits.departureAt[order[k]];
      if (!(departure <= at)) use(order[k]);
    }
  }
  return {
    presentAt(at) {
      const present = new Array<number>(areas).fill(0);
      forEachPresent(at, (i) => (present[visits.area[i]] += 1));
      return present;
    },
    censusAt(at) {
      const census = Array.from({ length: areas }, () => ({ takenAt: at, present: 0, waiting: 0, boarding: 0 }));
      forEachPresent(at, (i) => {
        const area = census[visits.area[i]];
        area.present += 1;
        if (visits.bedSpaceAt[i] > at) area.waiting += 1;
        else if (visits.disposition[i] === dispositionCode.admitted && visits.admissionDecisionAt[i] <= at)
          area.boarding += 1;
      });
      return census;
    },
  };
}
