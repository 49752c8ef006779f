import type { Express } from 'express';
import * as api from '../../../shared/api/tokens.ts';
import type { Dependencies } from '../../dependencies.ts';
import { MachineToken } from '../../entities/MachineToken.ts';
import { Site } from '../../entities/Site.ts';
import { badInput } from '../../errors.ts';
import { addRoute, addSiteRoute, type RouteTable } from '../../http/route.ts';
import { makeToken } from './make-token.ts';
import { revokeToken } from './revoke-token.ts';

/** Machine tokens: the administrator's for every site and purpose, the steward's for the nightly upload of a site. */
export function addTokenRoutes(app: Express, table: RouteTable, deps: Dependencies): void {
  const { read } = deps.database;

  addRoute(app, table, deps, api.listTokens, async () => {
    const tokens = await read.find(MachineToken, {
      relations: { site: true },
      order: { createdAt: 'DESC', id: 'ASC' },
    });
    const sites = await read.find(Site, { order: { name: 'ASC' } });
    return {
      tokens: tokens.map((token) => presentToken(token, token.site)),
      sites: sites.map(({ id, name }) => ({ id, name })),
    };
  });

  addRoute(app, table, deps, api.makeToken, async (context) => {
    const { siteId, purpose, name } = context.body;
    const site = await read.findOneBy(Site, { id: siteId });
    if (!site) throw badInput('The token was refused.', [{ at: 'siteId', message: 'There is no such site.' }]);
    const { token, secret } = await makeToken(deps, context, site, { purpose, name });
    return { token: presentToken(token, site), secret };
  });

  addRoute(app, table, deps, api.revokeToken, async (context) => {
    const { token, site } = await revokeToken(deps, context, { id: context.params.tokenId });
    return presentToken(token, site);
  });

  // Below a site only what the steward may make.
  const purpose = 'visit-log';

  addSiteRoute(app, table, deps, api.listSiteTokens, async ({ site }) => {
    const where = { siteId: site.id, purpose } as const;
    const tokens = await read.find(MachineToken, { where, order: { createdAt: 'DESC', id: 'ASC' } });
    return { tokens: tokens.map((token) => presentToken(token, site)) };
  });

  addSiteRoute(app, table, deps, api.makeSiteToken, async (context) => {
    const { name } = context.body;
    const { token, secret } = await makeToken(deps, context, context.site, { purpose, name });
    return { token: presentToken(token, context.site), secret };
  });

  addSiteRoute(app, table, deps, api.revokeSiteToken, async (context) => {
    const where = { id: context.params.tokenId, siteId: context.site.id, purpose } as const;
    const { token, site } = await revokeToken(deps, context, where);
    return presentToken(token, site);
  });
}

function presentToken(token: MachineToken, site: Site): api.MachineToken {
  const { id, siteId, purpose, name, createdBy, createdAt, lastUsedAt, revokedAt } = token;
  return { id, siteId, siteName: site.name, purpose, name, createdBy, createdAt, lastUsedAt, revokedAt };
}
