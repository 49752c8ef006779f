import type { Request } from 'express';
import './session-data.ts';
import type { Contract } from '../../shared/api/contract.ts';
import { isGranted } from '../../shared/domain/permission.ts';
import type { TokenPurpose } from '../../shared/domain/token-purpose.ts';
import type { Dependencies } from '../dependencies.ts';
import { MachineToken } from '../entities/MachineToken.ts';
import { Site } from '../entities/Site.ts';
import { notAllowed, notFound, notSignedIn, sessionLocked, tokenForOther, tokenRefused } from '../errors.ts';
import { readCaller, type Caller } from './caller.ts';
import { tokenOf } from './machine-token.ts';
import { isLocked } from './session-use.ts';

/** `lastUsedAt` is moved on at most this often, so that every call does not write. */
const touchEverySeconds = 60;

export interface Authorized {
  caller: Caller | null;
  site: Site | null;
  /** The machine token that the request came with, instead of a caller. */
  token: MachineToken | null;
}

/**
 * Decides whether a request may reach its handler.
 * - a public route: anybody;
 * - a route for machine tokens, called with one: as `authorizeToken` says, whatever session comes along;
 * - nobody signed in: 401;
 * - a site that the caller has no role at: 404, as if it did not exist;
 * - a role at the site, but without the permission: 403.
 */
export async function authorize(
  deps: Dependencies,
  req: Request,
  contract: Contract,
  now: number,
): Promise<Authorized> {
  const token = tokenOf(req);
  if (contract.token && token !== undefined) return authorizeToken(deps, req, contract.token, token, now);

  // Health checks lie outside the paths that have sessions.
  const locked = isLocked(req);
  const personId = locked ? undefined : (req.session as Request['session'] | undefined)?.personId;
  const caller = personId === undefined ? null : await readCaller(deps.database.read, personId, now);
  if (contract.access === 'public') return { caller, site: null, token: null };
  if (!caller) throw locked ? sessionLocked() : notSignedIn();
  if (contract.access === 'signed-in') return { caller, site: null, token: null };

  const siteId = req.params.siteId;
  if (typeof siteId === 'string') {
    const roles = caller.rolesAt.get(siteId);
    const site = roles ? await deps.database.read.findOneBy(Site, { id: siteId }) : null;
    if (!roles || !site) throw notFound('This site');
    if (!isGranted(roles, contract.access)) throw notAllowed();
    return { caller, site, token: null };
  }
  if (!isGranted(caller.installationRoles, contract.access)) throw notAllowed();
  return { caller, site: null, token: null };
}

/** As for people: unknown or revoked 401; of another site 404, as if that did not exist; for another purpose 403. */
async function authorizeToken(
  deps: Dependencies,
  req: Request,
  purpose: TokenPurpose,
  token: MachineToken | null,
  now: number,
): Promise<Authorized> {
  if (!token) {
    // RFC 9110, 15.5.2: a 401 names the scheme that would be accepted.
    req.res?.setHeader('www-authenticate', 'Bearer error="invalid_token"');
    throw tokenRefused();
  }
  const site =
    token.siteId === req.params.siteId ? await deps.database.read.findOneBy(Site, { id: token.siteId }) : null;
  if (!site) throw notFound('This site');
  if (token.purpose !== purpose) throw tokenForOther();
  if (token.lastUsedAt === null || token.lastUsedAt <= now - touchEverySeconds) {
    await deps.database.write((manager) => manager.update(MachineToken, { id: token.id }, { lastUsedAt: now }));
  }
  return { caller: null, site, token };
}
