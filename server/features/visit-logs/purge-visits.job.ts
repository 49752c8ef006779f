import { In, LessThan } from 'typeorm';
import { z } from 'zod';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import type { Dependencies } from '../../dependencies.ts';
import { Site } from '../../entities/Site.ts';
import { VisitLog } from '../../entities/VisitLog.ts';
import { recordOwnAudit } from '../../http/audit.ts';
import type { JobKind } from '../../jobs/queue.ts';
import { deleteRows } from './load-rows.ts';

export const purgeJobKind = 'visit-log.purge';
const payloadSchema = z.object({ siteId: z.string() });
const rowsADelete = 2000;
const daySeconds = 86_400;

/** Start of the local day from which on visits are kept, UTC seconds. */
export function keptFrom(site: Pick<Site, 'timeZone' | 'visitRetentionDays'>, now: number): number {
  const zone = makeZone(site.timeZone);
  const today = Math.floor(zone.toLocal(now) / daySeconds) * daySeconds;
  const local = today - site.visitRetentionDays * daySeconds;
  // A midnight that the clocks skip begins with the first moment after it.
  for (let at = local; ; at += 900) {
    const found = zone.fromLocal(at);
    if (found.length > 0) return found[0];
  }
}

/**
 * Asks for the deletion of visits that are kept long enough. With this write they stop counting: a log's period begins
 * later, and a log of which nothing is left is purged. Nothing is written while there is nothing to purge, so that it
 * may be asked at any time.
 * @returns the job; null if there is nothing to purge
 */
export async function askForPurge(deps: Dependencies, site: Site): Promise<string | null> {
  const { database, clock, jobs } = deps;
  const now = clock();
  const cutoff = keptFrom(site, now);
  const tooOld = { siteId: site.id, status: 'ready', periodFrom: LessThan(cutoff) } as const;
  if (!(await database.read.existsBy(VisitLog, tooOld))) return null;
  return database.write(async (manager) => {
    const logs = await manager.findBy(VisitLog, tooOld);
    if (logs.length === 0) return null;
    for (const log of logs) {
      const statedFrom = log.statedFrom ?? log.periodFrom;
      await manager.update(
        VisitLog,
        { id: log.id },
        log.periodTo <= cutoff ? { status: 'purged', statedFrom } : { periodFrom: cutoff, statedFrom },
      );
    }
    const jobId = await jobs.enqueue(manager, {
      kind: purgeJobKind,
      title: `Delete visits kept for ${site.visitRetentionDays.toLocaleString('en')} days`,
      siteId: site.id,
      payload: { siteId: site.id },
      createdBy: 'the retention rule',
      maxAttempts: 20,
    });
    await recordOwnAudit(manager, {
      at: now,
      actor: 'the retention rule',
      siteId: site.id,
      event: 'visits.purged',
      subject: site.id,
      detail: { days: site.visitRetentionDays, keptFrom: cutoff, logs: logs.length, jobId },
    });
    return jobId;
  });
}

/** Deletes visits before the start of their log's period, and all of a purged log, in short writes; may be run again. */
export function makePurgeVisits(deps: Dependencies): JobKind {
  const { database } = deps;
  return {
    async run({ payload, signal, progress }) {
      const { siteId } = payloadSchema.parse(payload);
      const { timeZone } = await database.read.findOneByOrFail(Site, { id: siteId });
      const zone = makeZone(timeZone);
      const logs = await database.read.findBy(VisitLog, { siteId, status: In(['ready', 'purged']) });
      const shortened = logs.filter(({ statedFrom }) => statedFrom !== null);
      let deleted = 0;
      const tell = (done: number) => {
        signal.throwIfAborted();
        progress(done / shortened.length, `${deleted.toLocaleString('en')} visits deleted`);
      };
      for (const [index, log] of shortened.entries()) {
        if (log.status === 'purged') {
          const before = deleted;
          await deleteRows(deps, log.number, (rows) => {
            deleted = before + rows;
            tell(index);
          });
          continue;
        }
        for (;;) {
          const rows = await database.write(async (manager) => {
            if (log.kind === 'hourly counts') {
              const before = Math.floor(zone.toLocal(log.periodFrom) / 3600);
              const gone = await manager.query<unknown[]>(
                'DELETE FROM "hourly_count" WHERE "logNumber" = ? AND "rowNumber" IN (SELECT "rowNumber" FROM "hourly_count" WHERE "logNumber" = ? AND "localHour" < ? LIMIT ?) RETURNING 1',
                [log.number, log.number, before, rowsADelete],
              );
              return gone.length;
            }
            const gone = await manager.query<unknown[]>(
              'DELETE FROM "visit" WHERE "logNumber" = ? AND "rowNumber" IN (SELECT "rowNumber" FROM "visit" WHERE "logNumber" = ? AND "arrivalAt" < ? LIMIT ?) RETURNING 1',
              [log.number, log.number, log.periodFrom, rowsADelete],
            );
            return gone.length;
          });
          if (rows === 0) break;
          deleted += rows;
          tell(index);
          await new Promise((resolve) => setImmediate(resolve));
        }
      }
    },
  };
}
