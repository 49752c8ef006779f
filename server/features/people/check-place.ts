import type { EntityManager } from 'typeorm';
import type { Role } from '../../../shared/domain/permission.ts';
import { HealthGroup } from '../../entities/HealthGroup.ts';
import { Site } from '../../entities/Site.ts';
import { badInput, type Fault } from '../../errors.ts';

export interface Place {
  siteId: string | null;
  groupId: string | null;
}

/** Refuses a role at a place where it cannot be held. */
export async function checkPlace(read: EntityManager, role: Role, { siteId, groupId }: Place): Promise<void> {
  const faults: Fault[] = [];
  if (role === 'administrator') {
    if (siteId !== null || groupId !== null) {
      faults.push({ at: 'role', message: 'An administrator’s role is for the installation, not for a site or group.' });
    }
  } else if (groupId !== null) {
    if (siteId !== null) faults.push({ at: 'groupId', message: 'Choose either a site or a group.' });
    if (role !== 'executive') faults.push({ at: 'groupId', message: 'Only an executive’s role covers a group.' });
    if (!(await read.existsBy(HealthGroup, { id: groupId })))
      faults.push({ at: 'groupId', message: 'There is no such group.' });
  } else if (siteId === null) faults.push({ at: 'siteId', message: 'Choose the site.' });
  if (siteId !== null && !(await read.existsBy(Site, { id: siteId })))
    faults.push({ at: 'siteId', message: 'There is no such site.' });
  if (faults.length > 0) throw badInput('The role cannot be given like this.', faults);
}
