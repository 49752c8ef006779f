import type { Covers } from '../../../shared/api/briefs.ts';
import { databaseFile } from '../../database/database.ts';
import { newId } from '../../database/new-id.ts';
import type { Dependencies } from '../../dependencies.ts';
import type { Brief } from '../../entities/Brief.ts';
import { HealthGroup } from '../../entities/HealthGroup.ts';
import { Site } from '../../entities/Site.ts';
import { workerUrl } from '../../simulation/pool.ts';
import type { ComposedBrief } from './brief-section.ts';
import type { BriefRequest } from './brief.worker.ts';
import { gatherSection } from './gather-section.ts';

/** A brief cannot be written; in words for whoever asked for it. */
export class BriefRefused extends Error {
  override name = 'BriefRefused';
}

/** A composed brief that is not stored yet. */
export type NewBrief = Pick<
  Brief,
  'id' | 'siteId' | 'siteIds' | 'composedAt' | 'composedBy' | 'subject' | 'html' | 'text' | 'attachments'
>;

/**
 * Composes a brief of a site, or of every site of its health group, as of now. Nothing is stored.
 * @throws BriefRefused where no site that it would tell of has a model in use
 * Cost: about a second a site, on a thread.
 */
export async function composeBrief(
  deps: Dependencies,
  site: Site,
  covers: Covers,
  composedBy: string,
  signal?: AbortSignal,
): Promise<NewBrief> {
  const { config, database, clock, pool } = deps;
  const { read } = database;
  const composedAt = clock();
  const sites =
    covers === 'site' ? [site] : await read.find(Site, { where: { groupId: site.groupId }, order: { name: 'ASC' } });
  const sections = [];
  for (const each of sites) sections.push(await gatherSection(read, each, composedAt));
  if (sections.every(({ refusal }) => refusal !== null)) {
    throw new BriefRefused(
      covers === 'site'
        ? `A brief of ${site.name} cannot be written: no arrival model is in use there. Fit a model and have it approved first.`
        : 'A brief of the group cannot be written: no arrival model is in use at any of its sites. Fit a model and have it approved first.',
    );
  }
  const group = covers === 'group' ? await read.findOneByOrFail(HealthGroup, { id: site.groupId }) : null;
  const request: BriefRequest = {
    databaseFile: databaseFile(config.dataDir),
    frame: { name: group?.name ?? site.name, covers, composedAt, baseUrl: config.baseUrl },
    sections,
  };
  const { pictures, ...parts } = await pool.run<ComposedBrief>(
    workerUrl(import.meta.url, 'brief.worker'),
    request,
    signal ? { signal } : {},
  );
  return {
    id: newId(),
    siteId: site.id,
    siteIds: sites.map(({ id }) => id),
    composedAt,
    composedBy,
    ...parts,
    attachments: JSON.stringify(pictures),
  };
}
