import type { Express } from 'express';
import * as api from '../../../shared/api/audit-log.ts';
import { verifyAuditChain, type ChainCheck } from '../../database/audit-chain.ts';
import type { Dependencies } from '../../dependencies.ts';
import { Site } from '../../entities/Site.ts';
import { addRoute, addSiteRoute, type RouteTable } from '../../http/route.ts';
import { exportEvents } from './export-events.ts';
import { presentEvent } from './present.ts';
import { readEvents, type AuditFilter } from './read-events.ts';
import { redactNote } from './redact-note.ts';

const pageSize = 50;
/** A check is asked for by every open page; one a minute is enough. */
const checkLastsSeconds = 60;

/** The audit trail: the administrator's for everything, the operations manager's for the site. */
export function addAuditLogRoutes(app: Express, table: RouteTable, deps: Dependencies): void {
  const { read } = deps.database;
  let last: { at: number; check: Promise<ChainCheck> } | null = null;

  async function checkChain(now: number): Promise<ChainCheck & { checkedAt: number }> {
    if (!last || last.at < now - checkLastsSeconds || last.at > now) {
      const check = verifyAuditChain(read);
      last = { at: now, check };
      check.then(
        ({ whole, fault }) => {
          if (!whole) deps.logger.error({ fault }, 'the audit trail is not whole');
        },
        () => {
          last = null;
        },
      );
    }
    const { at, check } = last;
    return { ...(await check), checkedAt: at };
  }

  const page = async (filter: AuditFilter, before: number | undefined, names: Map<string, string>, text: boolean) => {
    const rows = await readEvents(read, filter, before, pageSize + 1);
    const shown = rows.slice(0, pageSize);
    return {
      events: shown.map((row) => presentEvent(row, names, text)),
      before: rows.length > pageSize ? shown[shown.length - 1].event.id : null,
    };
  };
  const allSites = () => read.find(Site, { select: { id: true, name: true }, order: { name: 'ASC' } });
  const namesOf = (sites: readonly Pick<Site, 'id' | 'name'>[]) => new Map(sites.map(({ id, name }) => [id, name]));

  addRoute(app, table, deps, api.listAuditEvents, async ({ query: { before, ...filter } }) => {
    const sites = await allSites();
    return {
      ...(await page(filter, before, namesOf(sites), false)),
      sites: sites.map(({ id, name }) => ({ id, name })),
    };
  });

  addSiteRoute(app, table, deps, api.listSiteAuditEvents, ({ site, query: { before, ...filter } }) =>
    page({ ...filter, siteId: site.id }, before, namesOf([site]), true),
  );

  addRoute(app, table, deps, api.exportAuditEvents, async ({ res, query, now }) => {
    const siteNames = namesOf(await allSites());
    const of = query.siteId === undefined ? 'the whole installation' : (siteNames.get(query.siteId) ?? query.siteId);
    await exportEvents(deps, res, query, { of, now, chain: await checkChain(now), siteNames, withText: false });
    return undefined;
  });

  addSiteRoute(app, table, deps, api.exportSiteAuditEvents, async ({ res, query, site, now }) => {
    const facts = { of: site.name, now, chain: await checkChain(now), siteNames: namesOf([site]), withText: true };
    await exportEvents(deps, res, { ...query, siteId: site.id }, facts);
    return undefined;
  });

  addRoute(app, table, deps, api.checkAuditChain, ({ now }) => checkChain(now));
  addSiteRoute(app, table, deps, api.checkSiteAuditChain, ({ now }) => checkChain(now));

  addRoute(app, table, deps, api.redactAuditNote, async (context) => {
    await redactNote(deps, context, null, context.params.eventId, context.body.reason);
    return null;
  });
  addSiteRoute(app, table, deps, api.redactSiteAuditNote, async (context) => {
    await redactNote(deps, context, context.site.id, context.params.eventId, context.body.reason);
    return null;
  });
}
