import { z } from 'zod';
import { acknowledgement } from './acknowledgements.ts';
import { defineContract } from './contract.ts';
import { id, instant, queryInstant, siteParams } from './common.ts';

const entry = z.object({
  id,
  /** When it was saved. */
  at: instant,
  by: z.string(),
  /** The first outlook issued at or after it, within a quarter of an hour: what was known with it. Null if none was. */
  outlookId: id.nullable(),
});

export const nightLogEntry = z.discriminatedUnion('kind', [
  entry.extend({
    kind: z.literal('census'),
    takenAt: instant,
    areas: z.array(z.object({ areaId: id, present: z.int(), waiting: z.int(), boarding: z.int() })),
    undecidedWaiting: z.int().nullable(),
  }),
  entry.extend({
    kind: z.literal('staffed beds'),
    areaId: id,
    beds: z.int(),
    blocked: z.int(),
    fromAt: instant,
    untilAt: instant,
    reason: z.string(),
  }),
  entry.extend({
    kind: z.literal('acknowledgement'),
    ...acknowledgement.pick({ areaId: true, fromAt: true, untilAt: true, note: true }).shape,
  }),
]);
export type NightLogEntry = z.infer<typeof nightLogEntry>;

export const nightLog = z.object({
  night: z.object({
    /** The date on which the night starts. */
    date: z.iso.date(),
    from: instant,
    to: instant,
    /** The end of the night before: the log starts there, so that the night shift reads what the day did for it. */
    since: instant,
  }),
  /** In time order. */
  entries: z.array(nightLogEntry),
});
export type NightLog = z.infer<typeof nightLog>;

export const getNightLog = defineContract({
  id: 'getNightLog',
  method: 'get',
  path: '/api/sites/:siteId/night-log',
  access: 'outlook:read',
  summary:
    'What was done in a night and in the day before it, in time order: censuses, changes of staffed beds with their reasons, acknowledgements.',
  params: siteParams,
  /** Any instant of the night, or of the day before it; now if left out. */
  query: z.object({ at: queryInstant.optional() }),
  reply: nightLog,
});
