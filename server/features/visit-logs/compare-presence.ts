import { mostCompared, type getVisitLogPresence } from '../../../shared/api/visit-log-presence.ts';
import type { ReplyOf } from '../../../shared/api/contract.ts';
import { readCounting } from '../../database/read-counting.ts';
import { presentInLogs } from '../../database/read-present.ts';
import { CareArea } from '../../entities/CareArea.ts';
import { VisitLog } from '../../entities/VisitLog.ts';
import { notFound } from '../../errors.ts';
import type { SiteContext } from '../../http/route.ts';

const farthestBack = 56 * 86_400;

/** Present by the logs against what was counted, at the censuses within the spans for which a log counts. */
export async function comparePresence({
  deps,
  site,
  params,
  now,
}: SiteContext<typeof getVisitLogPresence>): Promise<ReplyOf<typeof getVisitLogPresence>> {
  const { read } = deps.database;
  const log = await read.findOneBy(VisitLog, { id: params.logId, siteId: site.id });
  if (!log) throw notFound('This log');
  const counts = (await readCounting(read, site.id)).find(({ id }) => id === log.id)?.counts ?? [];
  const end = Math.max(0, ...counts.map(({ to }) => to));
  const rows = await read.query<{ takenAt: number; areaId: string; counted: number }[]>(
    // Of two counts of one area at one time, the one saved later.
    `SELECT area.takenAt, area.areaId, area.present AS counted, MAX(area.savedAt)
     FROM census_area area JOIN census ON census.id = area.censusId
     WHERE census.siteId = ? AND census.takenAt >= ? AND census.takenAt < ?
     GROUP BY area.takenAt, area.areaId ORDER BY area.takenAt`,
    [site.id, end - farthestBack, end],
  );
  const within = rows.filter(({ takenAt }) => counts.some(({ from, to }) => from <= takenAt && takenAt < to));
  const times = [...new Set(within.map(({ takenAt }) => takenAt))].slice(-mostCompared);
  if (times.length === 0) return { compared: [] };
  const areas = await read.find(CareArea, { where: { siteId: site.id }, order: { position: 'ASC' } });
  const present = await presentInLogs(read, site, areas, times, now);
  const counted = new Map(within.map((row) => [`${String(row.takenAt)} ${row.areaId}`, row.counted]));
  const compared = times.map((takenAt, time) =>
    areas.flatMap(({ id, name }, area) => {
      const entered = counted.get(`${String(takenAt)} ${id}`);
      const inLog = present[area][time];
      return entered === undefined || inLog === null ? [] : [{ takenAt, areaId: id, name, counted: entered, inLog }];
    }),
  );
  return { compared: compared.reverse().flat() };
}
