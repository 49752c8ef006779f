import { z } from 'zod';
import { defineContract } from './contract.ts';
import { id, instant, siteParams } from './common.ts';

/** A calendar feed as it is shown: never with its secret. */
export const calendarFeed = z.object({
  id,
  name: z.string(),
  createdBy: z.string(),
  createdAt: instant,
  /** To the minute; null if no calendar has read it yet. */
  lastReadAt: instant.nullable(),
  revokedAt: instant.nullable(),
});
export type CalendarFeed = z.infer<typeof calendarFeed>;

const feeds = '/api/sites/:siteId/calendar-feeds';

export const listCalendarFeeds = defineContract({
  id: 'listCalendarFeeds',
  method: 'get',
  path: feeds,
  access: 'site-settings:edit',
  summary: 'Calendar feeds of the site’s shifts past the limit, newest first.',
  params: siteParams,
  reply: z.object({ feeds: z.array(calendarFeed) }),
});

export const makeCalendarFeed = defineContract({
  id: 'makeCalendarFeed',
  method: 'post',
  path: feeds,
  access: 'site-settings:edit',
  summary: 'Make a calendar feed. Its secret address is shown once.',
  params: siteParams,
  body: z.object({ name: z.string().trim().min(3, 'At least 3 characters').max(80, 'At most 80 characters') }),
  status: 201,
  reply: z.object({
    feed: calendarFeed,
    /** Shown this once: only its digest is kept. */
    address: z.string(),
  }),
});

export const revokeCalendarFeed = defineContract({
  id: 'revokeCalendarFeed',
  method: 'post',
  path: `${feeds}/:feedId/revocation`,
  access: 'site-settings:edit',
  summary: 'Revoke a calendar feed: its address answers 404 from the next call on.',
  params: siteParams.extend({ feedId: id }),
  reply: calendarFeed,
});

export const readCalendarFeed = defineContract({
  id: 'readCalendarFeed',
  method: 'get',
  // The secret is a query, because paths are logged and queries are not.
  path: '/api/calendar-feed.ics',
  access: 'public',
  summary:
    'The feed itself (RFC 5545), by its secret address: every shift whose chance of shortfall is past the limit.',
  query: z.object({ secret: z.string().max(200).default('') }),
  reply: z.unknown(),
  replyType: 'text/calendar',
});
