import type { EntityManager } from 'typeorm';
import { CareArea } from '../entities/CareArea.ts';
import { Shift } from '../entities/Shift.ts';

/** Care areas in the site's own order. */
export function readAreas(read: EntityManager, siteId: string): Promise<CareArea[]> {
  return read.find(CareArea, { where: { siteId }, order: { position: 'ASC' } });
}

/** Shifts by the minute of the day at which they start. */
export function readShifts(read: EntityManager, siteId: string): Promise<Shift[]> {
  return read.find(Shift, { where: { siteId }, order: { startMinute: 'ASC' } });
}
