import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { withCountedArrivals } from '../../../shared/forecasting/counted-hours.ts';
import { countHourly } from '../../../shared/forecasting/count-hourly.ts';
import { refreshLevel } from '../../../shared/forecasting/refresh-level.ts';
import type { ArrivalModel } from '../../../shared/forecasting/arrival-model.ts';
import { coveredSpans, gapsBetween } from '../../database/covered-spans.ts';
import { readSiteVisits } from '../../database/read-visits.ts';

/** What moving a level on needs. */
export interface RefreshRequest {
  databaseFile: string;
  siteId: string;
  timeZone: string;
  stayCapHours: number;
  /** Outages and diversions; `areaId` null means every area. */
  gaps: { areaId: string | null; from: number; to: number }[];
  areaIds: string[];
  arrival: ArrivalModel;
  trainedTo: number;
  now: number;
}

const hour = 3600;

/** Moves the level of a model on by the arrivals since its training: as it was where nothing newer counts, null where it knows an area too few. */
export default function refresh(request: RefreshRequest): { arrival: ArrivalModel; trainedTo: number } | null {
  const { databaseFile, siteId, trainedTo, areaIds, now } = request;
  const from = trainedTo - 24 * hour;
  const zone = makeZone(request.timeZone);
  const { table: visits, areaIds: siteAreaIds, lineage, hourly } = readSiteVisits(databaseFile, siteId, from);
  const table = withCountedArrivals(visits, hourly.counted, zone);
  const covered = coveredSpans([...lineage, ...hourly.lineage], now, request.stayCapHours * hour)
    .map((span) => ({ from: Math.max(span.from, from), to: span.to }))
    .filter((span) => span.to > span.from);
  const last = covered.at(-1);
  if (!last || last.to <= trainedTo + hour) return { arrival: request.arrival, trainedTo };
  // An area that the model has never seen has no level to move.
  const place = siteAreaIds.map((id) => areaIds.indexOf(id));
  if (place.some((index) => index < 0)) return null;
  for (let row = 0; row < table.length; row += 1) table.area[row] = place[table.area[row]];
  const gaps = [
    ...gapsBetween(covered).map((gap) => ({ area: null, ...gap })),
    ...request.gaps
      .filter((gap) => gap.to > covered[0].from && gap.from < last.to)
      .map((gap) => ({
        area: gap.areaId === null ? null : areaIds.indexOf(gap.areaId),
        from: Math.max(gap.from, covered[0].from),
        to: Math.min(gap.to, last.to),
      })),
  ];
  const counts = countHourly(table, areaIds.length, zone, covered[0].from, last.to, gaps);
  return { arrival: refreshLevel(request.arrival, counts), trainedTo: last.to };
}
