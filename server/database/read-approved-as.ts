import type { EntityManager } from 'typeorm';
import { ArrivalModelRow } from '../entities/ArrivalModelRow.ts';

/** The model that was approved, by every row that its level was moved on to. */
export async function readApprovedAs(read: EntityManager, siteId: string): Promise<Record<string, string>> {
  const rows = await read.find(ArrivalModelRow, { where: { siteId }, select: { id: true, refreshedFromId: true } });
  const from = new Map(rows.map((row) => [row.id, row.refreshedFromId]));
  const rootOf = (modelId: string): string => {
    let at = modelId;
    for (let before = from.get(at); before; before = from.get(at)) at = before;
    return at;
  };
  return Object.fromEntries(rows.map((row) => [row.id, rootOf(row.id)]));
}
