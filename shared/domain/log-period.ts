import type { VisitReport } from './visit-report.ts';
import { makeZone, type Zone } from './zoned-time.ts';
import type { TimeSpan } from './file-study.ts';

/**
 * The period that a log states: whole local days from that of the first arrival to that of the last,
 * but not past the moment when the extract was taken.
 * @param takenAt UTC seconds
 * @returns null without good rows
 */
export function periodOf(
  report: Pick<VisitReport, 'firstArrivalAt' | 'lastArrivalAt'>,
  timeZone: string,
  takenAt: number,
): TimeSpan | null {
  const { firstArrivalAt, lastArrivalAt } = report;
  if (firstArrivalAt === null || lastArrivalAt === null) return null;
  const zone = makeZone(timeZone);
  const firstDay = Math.floor(zone.toLocal(firstArrivalAt) / 86_400);
  const lastDay = Math.floor(zone.toLocal(lastArrivalAt) / 86_400);
  return {
    from: startOfDay(zone, firstDay),
    to: Math.max(lastArrivalAt + 1, Math.min(startOfDay(zone, lastDay + 1), takenAt)),
  };
}

/** First instant of a local day; where a clock change skips midnight, the instant of the change. */
function startOfDay(zone: Zone, day: number): number {
  const midnight = zone.fromLocal(day * 86_400)[0] as number | undefined;
  if (midnight !== undefined) return midnight;
  const near = day * 86_400 - zone.offsetAt(day * 86_400);
  return zone.changesBetween(near - 86_400, near + 86_400)[0].at;
}
