import type { Request } from 'express';
import './session-data.ts';
import type { Contract } from '../../shared/api/contract.ts';
import { isGranted } from '../../shared/domain/permission.ts';
import type { Dependencies } from '../dependencies.ts';
import { Site } from '../entities/Site.ts';
import { notAllowed, notFound, notSignedIn } from '../errors.ts';
import { readCaller, type Caller } from './caller.ts';

/**
 * Decides whether a request may reach its handler.
 * - a public route: anybody;
 * - nobody signed in: 401;
 * - a site that the caller has no role at: 404, as if it did not exist;
 * - a role at the site, but without the permission: 403.
 */
export async function authorize(
  deps: Dependencies,
  req: Request,
  contract: Contract,
  now: number,
): Promise<{ caller: Caller | null; site: Site | null }> {
  // Health checks lie outside the paths that have sessions.
  const personId = (req.session as Request['session'] | undefined)?.personId;
  const caller = personId === undefined ? null : await readCaller(deps.database.read, personId, now);
  if (contract.access === 'public') return { caller, site: null };
  if (!caller) throw notSignedIn();
  if (contract.access === 'signed-in') return { caller, site: null };

  const siteId = req.params.siteId;
  if (typeof siteId === 'string') {
    const roles = caller.rolesAt.get(siteId);
    const site = roles ? await deps.database.read.findOneBy(Site, { id: siteId }) : null;
    if (!roles || !site) throw notFound('This site');
    if (!isGranted(roles, contract.access)) throw notAllowed();
    return { caller, site };
  }
  if (!isGranted(caller.installationRoles, contract.access)) throw notAllowed();
  return { caller, site: null };
}
