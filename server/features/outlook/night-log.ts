import type { EntityManager } from 'typeorm';
import type { NightLog, NightLogEntry } from '../../../shared/api/night-log.ts';
import { nightOf } from '../../../shared/domain/night.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { readAreas, readShifts } from '../../database/read-site.ts';
import { BedChange } from '../../entities/BedChange.ts';
import { Census } from '../../entities/Census.ts';
import { CensusArea } from '../../entities/CensusArea.ts';
import type { Site } from '../../entities/Site.ts';
import { readAcknowledgementsMade } from './read-acknowledgements.ts';
import { readOutlookNames } from './read-outlook-names.ts';

/** An outlook that is issued later than this after an entry was not issued for it. */
const outlookReach = 900;

/** What was done in the night of an instant, and in the day before it, in time order. */
export async function presentNightLog(read: EntityManager, site: Site, at: number): Promise<NightLog> {
  const night = nightOf(makeZone(site.timeZone), await readShifts(read, site.id), at);
  const { since, to } = night;
  const outlooks = await readOutlookNames(read, site.id, since, to + outlookReach);
  const outlookAfter = ({ at: saved, kind }: NightLogEntry) => {
    const near = outlooks.filter(({ issuedAt }) => issuedAt >= saved && issuedAt - saved <= outlookReach);
    // Wishes that come together are answered by one outlook, which carries the first one's trigger.
    const own = near.find(({ trigger }) => trigger === (kind === 'census' ? 'census saved' : 'staffed beds changed'));
    return (own ?? near.at(0))?.id ?? null;
  };
  const entries: NightLogEntry[] = [
    ...(await censusEntries(read, site.id, since, to)),
    ...(await bedEntries(read, site.id, since, to)),
  ].map((entry) => ({ ...entry, outlookId: outlookAfter(entry) }));
  for (const made of await readAcknowledgementsMade(read, site.id, since, to)) {
    const { id, at: madeAt, by, outlookId, areaId, fromAt, untilAt, note } = made;
    entries.push({ kind: 'acknowledgement', id, at: madeAt, by, outlookId, areaId, fromAt, untilAt, note });
  }
  return { night, entries: entries.sort((a, b) => a.at - b.at) };
}

async function censusEntries(read: EntityManager, siteId: string, from: number, to: number): Promise<NightLogEntry[]> {
  const censuses = await read
    .createQueryBuilder(Census, 'census')
    .where('census.siteId = :siteId AND census.savedAt >= :from AND census.savedAt < :to', { siteId, from, to })
    // Entries may be saved up to eight hours after they were taken; the index is on the latter.
    .andWhere('census.takenAt >= :reach AND census.takenAt < :to', { reach: from - 8 * 3600 })
    .orderBy('census.savedAt', 'ASC')
    .getMany();
  if (censuses.length === 0) return [];
  const order = new Map((await readAreas(read, siteId)).map((area) => [area.id, area.position]));
  const rows = await read
    .createQueryBuilder(CensusArea, 'area')
    .where('area.censusId IN (SELECT value FROM json_each(:ids))', {
      ids: JSON.stringify(censuses.map(({ id }) => id)),
    })
    .getMany();
  return censuses.map((census) => ({
    kind: 'census',
    id: census.id,
    at: census.savedAt,
    by: census.enteredBy,
    outlookId: null,
    takenAt: census.takenAt,
    areas: rows
      .filter((row) => row.censusId === census.id)
      .sort((a, b) => (order.get(a.areaId) ?? 0) - (order.get(b.areaId) ?? 0))
      .map(({ areaId, present, waiting, boarding }) => ({ areaId, present, waiting, boarding })),
    undecidedWaiting: census.undecidedWaiting,
  }));
}

async function bedEntries(read: EntityManager, siteId: string, from: number, to: number): Promise<NightLogEntry[]> {
  const changes = await read
    .createQueryBuilder(BedChange, 'change')
    .where('change.siteId = :siteId AND change.madeAt >= :from AND change.madeAt < :to', { siteId, from, to })
    .orderBy('change.madeAt', 'ASC')
    .getMany();
  return changes.map(({ id, madeAt, madeBy, areaId, beds, blocked, fromAt, untilAt, reason }) => ({
    kind: 'staffed beds',
    id,
    at: madeAt,
    by: madeBy,
    outlookId: null,
    areaId,
    beds,
    blocked,
    fromAt,
    untilAt,
    reason,
  }));
}
