import { In, Not, type EntityManager } from 'typeorm';
import type { Express } from 'express';
import * as api from '../../../shared/api/briefs.ts';
import { isGranted } from '../../../shared/domain/permission.ts';
import type { Dependencies } from '../../dependencies.ts';
import { Brief } from '../../entities/Brief.ts';
import { BriefDelivery } from '../../entities/BriefDelivery.ts';
import { BriefRecipient } from '../../entities/BriefRecipient.ts';
import { Job } from '../../entities/Job.ts';
import { conflict, notAllowed, notFound } from '../../errors.ts';
import { recordAudit } from '../../http/audit.ts';
import { addSiteRoute, type RouteTable, type SiteContext } from '../../http/route.ts';
import { composeJobKind } from './compose-brief.job.ts';
import { BriefRefused, composeBrief } from './compose-brief.ts';
import { presentBrief, presentDelivery, tallyOf } from './present.ts';
import { enqueueSending, newDelivery, putOnItsWay } from './put-on-its-way.ts';
import { presentSettings, readSettings, saveSettings } from './settings.ts';
import { showHtml } from './show-html.ts';

/** Drafts kept beside what was sent: the newest few. */
const draftsKept = 5;
const listed = 60;

/** Weekly briefs of a site: archive, drafts, sending, schedule. */
export function addBriefRoutes(app: Express, table: RouteTable, deps: Dependencies): void {
  const { read, write } = deps.database;

  addSiteRoute(app, table, deps, api.listBriefs, async (context) => {
    const { site, caller } = context;
    const maySend = isGranted(caller.rolesAt.get(site.id) ?? [], 'brief:send');
    const where = { siteId: site.id, ...(maySend ? {} : { state: In(['sending', 'sent']) }) };
    const found = await read.find(Brief, { where, order: { composedAt: 'DESC', id: 'ASC' }, take: listed });
    const briefs = found.filter((brief) => mayReadAll(context, brief.siteIds, 'brief:read'));
    const tally = await tallyOf(
      read,
      briefs.map(({ id }) => id),
    );
    const settings = await readSettings(read, site.id);
    const maySubscribe = isGranted(caller.rolesAt.get(site.id) ?? [], 'brief:subscribe');
    return {
      briefs: briefs.map((brief) => ({ ...presentBrief(brief), tally: tally(brief.id) })),
      settings: await presentSettings(deps, context, settings),
      subscription: maySubscribe ? await ownSubscription(read, context) : null,
      failure: await newestFailure(read, site.id, found.at(0)?.composedAt ?? 0),
    };
  });

  addSiteRoute(app, table, deps, api.getBrief, async (context) => {
    const brief = await readWhole(context);
    return { ...(await withTally(read, brief)), text: brief.text };
  });

  addSiteRoute(app, table, deps, api.getBriefHtml, async (context) => {
    showHtml(context.res, await readWhole(context));
    return undefined;
  });

  addSiteRoute(app, table, deps, api.composeBrief, async (context) => {
    const { site, caller } = context;
    const { covers } = await readSettings(read, site.id);
    let composed;
    try {
      composed = await composeBrief(deps, site, covers, caller.person.name);
    } catch (error) {
      throw error instanceof BriefRefused ? conflict(error.message, 'Open Arrival model to fit one.') : error;
    }
    if (!mayReadAll(context, composed.siteIds, 'brief:send')) throw notAllowed();
    const nobody = { scheduledFor: null, approvedBy: null, approvedAt: null, sentAt: null };
    await write(async (manager) => {
      await manager.insert(Brief, { ...composed, ...nobody, state: 'draft' });
      const drafts = await manager.find(Brief, {
        where: { siteId: site.id, state: 'draft' },
        order: { composedAt: 'DESC', id: 'ASC' },
        skip: draftsKept,
        take: 50,
      });
      for (const { id } of drafts) if (id !== composed.id) await manager.delete(Brief, { id });
      await recordAudit(manager, context, 'brief.composed', composed.id);
    });
    return withTally(read, await read.findOneByOrFail(Brief, { id: composed.id }));
  });

  addSiteRoute(app, table, deps, api.sendBrief, async (context) => {
    const { id } = await readOwn(context, 'brief:send');
    const { name } = context.caller.person;
    await write(async (manager) => {
      const brief = await manager.findOneByOrFail(Brief, { id });
      if (brief.state === 'sending' || brief.state === 'sent') {
        throw conflict('This brief was sent already.', 'Compose a new one to send it again.');
      }
      const recipients = await putOnItsWay(deps, manager, brief, name);
      if (recipients === 0) throw conflict('Nobody receives the brief yet.', 'Add a recipient first.');
      await manager.update(Brief, { id }, { approvedBy: name, approvedAt: context.now });
      await recordAudit(manager, context, 'brief.approved', id, { recipients });
    });
    return withTally(read, await read.findOneByOrFail(Brief, { id }));
  });

  addSiteRoute(app, table, deps, api.sendTestBrief, async (context) => {
    const brief = await readOwn(context, 'brief:send');
    const { name, email: address } = context.caller.person;
    await write(async (manager) => {
      const delivery = newDelivery(brief, { name, address }, null, 0);
      await manager.insert(BriefDelivery, delivery);
      await enqueueSending(deps, manager, brief, name, delivery.id);
      await recordAudit(manager, context, 'brief.test-sent', brief.id);
    });
    return { address };
  });

  addSiteRoute(app, table, deps, api.listDeliveries, async (context) => {
    const { id } = await readOwn(context, 'brief:send');
    const deliveries = await read.find(BriefDelivery, {
      where: { briefId: id },
      order: { position: 'ASC', id: 'ASC' },
      take: 2000,
    });
    return { deliveries: deliveries.map(presentDelivery) };
  });

  addSiteRoute(app, table, deps, api.resendDelivery, async (context) => {
    const brief = await readOwn(context, 'brief:send');
    const where = { id: context.params.deliveryId, briefId: brief.id };
    return write(async (manager) => {
      const delivery = await manager.findOneBy(BriefDelivery, where);
      if (!delivery || delivery.recipientId === null) throw notFound('This delivery');
      if (!['not known', 'given up', 'refused'].includes(delivery.state)) {
        throw conflict('This one needs no sending again.', 'Look at its state in the list.');
      }
      await manager.update(BriefDelivery, where, { state: 'waiting' });
      const { state } = await manager.findOneByOrFail(Brief, { id: brief.id });
      if (state !== 'sending') {
        await manager.update(Brief, { id: brief.id }, { state: 'sending' });
        await enqueueSending(deps, manager, brief, context.caller.person.name);
      }
      await recordAudit(manager, context, 'brief.sent-again', brief.id, { deliveryId: delivery.id });
      return presentDelivery(Object.assign(delivery, { state: 'waiting' as const }));
    });
  });

  addSiteRoute(app, table, deps, api.saveBriefSettings, (context) => saveSettings(deps, context));
}

type Asking = Pick<SiteContext<{ params: { briefId: string } }>, 'site' | 'caller' | 'deps'> & {
  params: { briefId: string };
};

/** True where the caller holds the permission at every one of the sites. */
function mayReadAll(
  { caller }: Pick<Asking, 'caller'>,
  siteIds: readonly string[],
  permission: 'brief:read' | 'brief:send',
): boolean {
  return siteIds.every((siteId) => isGranted(caller.rolesAt.get(siteId) ?? [], permission));
}

/** A brief of the site; one that tells of a site of others, or a draft for who may not send, answers as if it were not there. */
async function readOwn(context: Asking, permission: 'brief:read' | 'brief:send'): Promise<Brief> {
  const { params, site, caller, deps } = context;
  const brief = await deps.database.read.findOneBy(Brief, { id: params.briefId, siteId: site.id });
  const maySend = isGranted(caller.rolesAt.get(site.id) ?? [], 'brief:send');
  const seen = brief !== null && (maySend || brief.state === 'sent' || brief.state === 'sending');
  if (!seen || !mayReadAll(context, brief.siteIds, permission)) throw notFound('This brief');
  return brief;
}

async function readWhole(context: Asking): Promise<Brief> {
  const { id } = await readOwn(context, 'brief:read');
  return context.deps.database.read
    .createQueryBuilder(Brief, 'brief')
    .addSelect(['brief.html', 'brief.text', 'brief.attachments'])
    .where('brief.id = :id', { id })
    .getOneOrFail();
}

async function withTally(read: EntityManager, brief: Brief) {
  const tally = await tallyOf(read, [brief.id]);
  return { ...presentBrief(brief), tally: tally(brief.id) };
}

async function ownSubscription(read: EntityManager, { site, caller }: Pick<Asking, 'site' | 'caller'>) {
  const address = caller.person.email;
  const own = await read.findOneBy(BriefRecipient, { siteId: site.id, address });
  const subscribed = own !== null && own.removedAt === null && own.unsubscribedAt === null && own.confirmedAt !== null;
  return { subscribed, address };
}

/** Why the newest brief that was due is not there; null where it is. */
async function newestFailure(
  read: EntityManager,
  siteId: string,
  since: number,
): Promise<{ at: number; error: string } | null> {
  const job = await read.findOne(Job, {
    where: { siteId, kind: composeJobKind, status: Not('done') },
    order: { createdAt: 'DESC' },
  });
  if (!job || job.status !== 'failed' || (job.endedAt ?? 0) < since) return null;
  return { at: job.endedAt ?? job.createdAt, error: job.error ?? 'The reason was not kept.' };
}
