import type { EntityManager } from 'typeorm';
import { In } from 'typeorm';
import { formatInstant } from '../../../shared/domain/instant.ts';
import type { Site } from '../../entities/Site.ts';
import { VisitLog } from '../../entities/VisitLog.ts';
import { conflict } from '../../errors.ts';

/** Throws a 409 that names the log if the same file stands at the site already. */
export async function refuseRepeat(manager: EntityManager, site: Site, sha256: string): Promise<void> {
  const log = await manager.findOneBy(VisitLog, { siteId: site.id, sha256, status: In(['loading', 'ready']) });
  if (!log) return;
  throw conflict(
    `The same file was uploaded by ${log.uploadedBy} at ${formatInstant(log.uploadedAt)} as ${log.fileName} (log ${log.id}), and it is ${log.status}.`,
    'There is nothing to do. To load it again, withdraw that log first.',
  );
}
