import type { DemoVisit } from './make-visit-log.ts';

/** A head count of one care area. */
export interface DemoCensus {
  areaId: string;
  present: number;
  /** Of those present, without a bed space yet. */
  waiting: number;
  /** Of those present, admitted and still in a bed space here. */
  boarding: number;
}

/**
 * Counts who is in each area's care at an instant, one entry for each area given, in that order.
 * The visits must reach back at least two days before it; visits of an outage belong to a head count
 * (`withUnrecorded`). Cost: linear in the visits.
 */
export function censusAt(visits: Iterable<DemoVisit>, at: number, areaIds: readonly string[]): DemoCensus[] {
  const counts = new Map<string, DemoCensus>(
    areaIds.map((areaId) => [areaId, { areaId, present: 0, waiting: 0, boarding: 0 }]),
  );
  for (const visit of visits) {
    if (visit.arrivalAt > at || (visit.departureAt !== null && visit.departureAt <= at)) continue;
    const count = counts.get(visit.areaId);
    if (!count) continue;
    count.present += 1;
    if (visit.bedSpaceAt === null || visit.bedSpaceAt > at) count.waiting += 1;
    else if (visit.admissionDecisionAt !== null && visit.admissionDecisionAt <= at) count.boarding += 1;
  }
  return [...counts.values()];
}
