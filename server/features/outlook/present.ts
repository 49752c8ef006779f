import type { EntityManager } from 'typeorm';
import type { z } from 'zod';
import type { Outlook, outlookTrigger } from '../../../shared/api/outlooks.ts';
import type { OutlookInput, OutlookResult } from '../../../shared/forecasting/outlook-types.ts';
import { ArrivalModelRow } from '../../entities/ArrivalModelRow.ts';
import { OutlookRow } from '../../entities/OutlookRow.ts';

const columns = {
  id: true,
  siteId: true,
  issuedAt: true,
  trigger: true,
  modelId: true,
  seed: true,
  replications: true,
  engineVersion: true,
  softwareVersion: true,
  computeMilliseconds: true,
  input: true,
  result: true,
  digest: true,
} as const;

/** A stored outlook with its inputs and result as text; null if the site has no such outlook. */
export function readOutlook(read: EntityManager, siteId: string, outlookId: string): Promise<OutlookRow | null> {
  return read.findOne(OutlookRow, { where: { siteId, id: outlookId }, select: columns });
}

/** A clock that is set back by more than this leaves outlooks of a time that has yet to come: they are not read before it. */
const clockSlackSeconds = 60;

/** The newest outlooks of a site as of now, newest first. */
export function readNewestOutlooks(
  read: EntityManager,
  siteId: string,
  count: number,
  now: number,
): Promise<OutlookRow[]> {
  return read
    .createQueryBuilder(OutlookRow, 'outlook')
    .select(Object.keys(columns).map((column) => `outlook.${column}`))
    .where('outlook.siteId = :siteId AND outlook.issuedAt <= :until', { siteId, until: now + clockSlackSeconds })
    .orderBy('outlook.issuedAt', 'DESC')
    .addOrderBy('outlook.rowid', 'DESC')
    .limit(count)
    .getMany();
}

/** An outlook as it leaves the server: exactly as issued. */
export async function presentOutlook(read: EntityManager, row: OutlookRow): Promise<Outlook> {
  const input = JSON.parse(row.input) as OutlookInput;
  const result = JSON.parse(row.result) as OutlookResult;
  const model = await read.findOneByOrFail(ArrivalModelRow, { id: row.modelId });
  return {
    id: row.id,
    issuedAt: row.issuedAt,
    trigger: row.trigger as z.infer<typeof outlookTrigger>,
    census: input.areas.map(({ areaId, census }) => ({
      areaId,
      takenAt: census?.takenAt ?? null,
      present: census?.present ?? null,
      waiting: census?.waiting ?? null,
      boarding: census?.boarding ?? null,
    })),
    undecided: input.undecided,
    staffedBeds: input.areas.map(({ areaId, staffedBeds }) => ({ areaId, steps: staffedBeds })),
    model: {
      id: model.id,
      fittedAt: model.fittedAt ?? 0,
      approvedAt: model.approvedAt,
      trainedTo: model.trainedTo ?? 0,
      staysFrom: model.staysFrom,
      weeksOfHistory: ((model.trainedTo ?? 0) - (model.trainedFrom ?? 0)) / (7 * 86_400),
    },
    planningRisk: input.planningRisk,
    seed: row.seed,
    softwareVersion: row.softwareVersion,
    computeMilliseconds: row.computeMilliseconds,
    result,
  };
}
