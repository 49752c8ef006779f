import { randomBytes } from 'node:crypto';
import type { Express } from 'express';
import rateLimit, { ipKeyGenerator } from 'express-rate-limit';
import { IsNull } from 'typeorm';
import * as api from '../../../shared/api/calendar-feeds.ts';
import { withArticle } from '../../../shared/domain/identifier-kind.ts';
import { screenNote } from '../../../shared/domain/screen-note.ts';
import { newId } from '../../database/new-id.ts';
import type { Dependencies } from '../../dependencies.ts';
import { CalendarFeed } from '../../entities/CalendarFeed.ts';
import { badInput, conflict, HttpError, notFound } from '../../errors.ts';
import { recordAudit } from '../../http/audit.ts';
import { hashSecret } from '../../http/machine-token.ts';
import { addRoute, addSiteRoute, type RouteTable } from '../../http/route.ts';
import { feedText } from './feed-text.ts';
import { readShiftsPastLimit } from './shifts-past-limit.ts';

/** Readings of one address within a minute; calendar programs ask a few times an hour. */
export const readingsAMinute = 60;
const mostFeeds = 50;
/** `lastReadAt` is moved on at most this often, so that every reading does not write. */
const touchEverySeconds = 60;

/** The calendar feed of shifts past the limit, and who may read it: whoever has its secret address. */
export function addCalendarFeedRoutes(app: Express, table: RouteTable, deps: Dependencies): void {
  const { read, write } = deps.database;

  addSiteRoute(app, table, deps, api.listCalendarFeeds, async ({ site }) => {
    const feeds = await read.find(CalendarFeed, {
      where: { siteId: site.id },
      order: { createdAt: 'DESC', id: 'ASC' },
    });
    return { feeds: feeds.map(presentFeed) };
  });

  addSiteRoute(app, table, deps, api.makeCalendarFeed, async (context) => {
    const { site, caller, body, now } = context;
    const kind = screenNote(body.name);
    if (kind !== null) {
      const message = `This looks like ${withArticle(kind)}. Name the calendar that will read the feed.`;
      throw badInput('The name was refused.', [{ at: 'name', message }]);
    }
    const secret = randomBytes(32).toString('base64url');
    const id = newId();
    const feed = await write(async (manager) => {
      if ((await manager.countBy(CalendarFeed, { siteId: site.id, revokedAt: IsNull() })) >= mostFeeds) {
        throw conflict(`The site has ${String(mostFeeds)} calendar feeds already.`, 'Revoke one that nobody reads.');
      }
      const row = { siteId: site.id, name: body.name, secretHash: hashSecret(secret), createdBy: caller.person.name };
      await manager.insert(CalendarFeed, { ...row, id, createdAt: now, lastReadAt: null, revokedAt: null });
      await recordAudit(manager, context, 'calendar-feed.made', id, { name: body.name });
      return manager.findOneByOrFail(CalendarFeed, { id });
    });
    return { feed: presentFeed(feed), address: `${deps.config.baseUrl}${api.readCalendarFeed.path}?secret=${secret}` };
  });

  addSiteRoute(app, table, deps, api.revokeCalendarFeed, async (context) => {
    const where = { id: context.params.feedId, siteId: context.site.id };
    const feed = await write(async (manager) => {
      const found = await manager.findOneBy(CalendarFeed, where);
      if (!found) throw notFound('This calendar feed');
      if (found.revokedAt !== null) throw conflict('This calendar feed is revoked already.', 'Nothing more to do.');
      await manager.update(CalendarFeed, where, { revokedAt: context.now });
      await recordAudit(manager, context, 'calendar-feed.revoked', found.id, { name: found.name });
      return Object.assign(found, { revokedAt: context.now });
    });
    return presentFeed(feed);
  });

  app.use(
    api.readCalendarFeed.path,
    rateLimit({
      windowMs: 60_000,
      limit: readingsAMinute,
      standardHeaders: 'draft-8',
      legacyHeaders: false,
      validate: { xForwardedForHeader: false },
      keyGenerator: (req) => ipKeyGenerator(req.ip ?? ''),
      handler: (_req, _res, next) => {
        next(
          new HttpError(429, 'Too many requests', 'The calendar feed was read too often within a minute.', {
            next: 'Set the calendar program to read it once an hour.',
          }),
        );
      },
    }),
  );

  addRoute(app, table, deps, api.readCalendarFeed, async ({ query, now, res }) => {
    const feed = await read.findOne(CalendarFeed, {
      where: { secretHash: hashSecret(query.secret), revokedAt: IsNull() },
      relations: { site: true },
    });
    if (!feed) throw notFound('This calendar feed');
    if (feed.lastReadAt === null || feed.lastReadAt <= now - touchEverySeconds) {
      await write((manager) => manager.update(CalendarFeed, { id: feed.id }, { lastReadAt: now }));
    }
    const content = await readShiftsPastLimit(read, feed.siteId, now);
    const text = feedText(feed.site, content, now, `${deps.config.baseUrl}/sites/${feed.siteId}/week`);
    res.setHeader('cache-control', 'private, max-age=300');
    res.setHeader('content-disposition', 'inline; filename="shifts-past-the-limit.ics"');
    // A search engine that comes upon the address must not list it.
    res.setHeader('x-robots-tag', 'noindex');
    res.type('text/calendar; charset=utf-8').send(text);
    return undefined;
  });
}

function presentFeed(feed: CalendarFeed): api.CalendarFeed {
  const { id, name, createdBy, createdAt, lastReadAt, revokedAt } = feed;
  return { id, name, createdBy, createdAt, lastReadAt, revokedAt };
}
