import type { EntityManager } from 'typeorm';
import type { TrackRecord } from '../../../shared/api/track-record.ts';

/** Every week outlook ever issued for a site, by how far it is scored. */
export async function countWeekOutlooks(read: EntityManager, siteId: string): Promise<TrackRecord['weekOutlooks']> {
  const [{ issued, recomputed }] = await read.query<{ issued: number; recomputed: number }[]>(
    `SELECT count(*) AS issued, total("trigger" = 'recomputed') AS recomputed FROM week_outlook WHERE siteId = ?`,
    [siteId],
  );
  const states = await countStates(read, 'week_outlook_laws', siteId);
  const { withLaws, ...counts } = states;
  return { issued, recomputed, ...counts, withoutLaws: issued - withLaws };
}

/** Outlooks by how far they are scored, and how many have kept distributions at all. */
async function countStates(read: EntityManager, table: 'outlook_laws' | 'week_outlook_laws', siteId: string) {
  const states = await read.query<{ state: string; n: number }[]>(
    `SELECT state, count(*) AS n FROM ${table} WHERE siteId = ? GROUP BY state`,
    [siteId],
  );
  const of = (state: string): number => states.find((row) => row.state === state)?.n ?? 0;
  return {
    scored: of('scored'),
    waiting: of('waiting'),
    withdrawn: of('withdrawn'),
    notRecorded: of('not recorded'),
    overtaken: of('overtaken'),
    withLaws: states.reduce((sum, { n }) => sum + n, 0),
  };
}

/** Every outlook of tonight ever issued for a site, by how far it is scored. */
export async function countOutlooks(read: EntityManager, siteId: string): Promise<TrackRecord['outlooks']> {
  const [all] = await read.query<{ issued: number; firstAt: number | null }[]>(
    'SELECT count(*) AS issued, min(issuedAt) AS firstAt FROM outlook WHERE siteId = ?',
    [siteId],
  );
  const recomputed = await countRecomputed(read, siteId, all.issued);
  const { withLaws, ...counts } = await countStates(read, 'outlook_laws', siteId);
  return {
    issued: all.issued,
    ...counts,
    withoutLaws: all.issued - withLaws,
    recomputed: recomputed.n,
    replicationsRecomputed: recomputed.replications,
    firstAt: all.firstAt,
  };
}

/**
 * How many outlooks were recomputed. All of them lie before the first that was issued at its time, so the border is sought along
 * the index: counting by trigger would read every outlook.
 */
async function countRecomputed(
  read: EntityManager,
  siteId: string,
  issued: number,
): Promise<{ n: number; replications: number | null }> {
  const at = async (place: number) => {
    const rows = await read.query<{ trigger: string; replications: number }[]>(
      'SELECT "trigger", replications FROM outlook WHERE siteId = ? ORDER BY issuedAt LIMIT 1 OFFSET ?',
      [siteId, place],
    );
    return rows.at(0);
  };
  let low = 0;
  let high = issued;
  while (low < high) {
    const middle = (low + high) >> 1;
    if ((await at(middle))?.trigger === 'recomputed') low = middle + 1;
    else high = middle;
  }
  return { n: low, replications: low > 0 ? ((await at(0))?.replications ?? null) : null };
}
