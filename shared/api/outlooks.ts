import { z } from 'zod';
import { acknowledgement } from './acknowledgements.ts';
import { defineContract } from './contract.ts';
import { id, instant, queryInstant, siteParams, staysFrom } from './common.ts';

const figures = z.array(z.number());
const percentiles = z.object({
  p5: figures,
  p10: figures,
  p25: figures,
  p50: figures,
  p75: figures,
  p90: figures,
  p95: figures,
  mean: figures,
});
const chance = z.object({ chance: z.number().min(0).max(1), se: z.number().min(0) });
const needByHour = z.object({
  need: percentiles,
  staffed: figures,
  shortfall: z.array(chance),
  shortfallWithin: z.array(chance),
  headroom: figures,
  bedsNeeded: figures,
});

/** One area of an outlook; the meaning of each figure stands with the engine's result type. */
export const areaOutlook = needByHour.extend({
  areaId: id,
  counted: z.boolean(),
  shifts: z.array(
    z.object({
      name: z.string(),
      from: instant,
      to: instant,
      someTime: chance,
      bedsForPlanningRisk: z.int(),
      bedsForAlertLimit: z.int(),
      bedsToStaff: z.int(),
      bedsThatDoNotExist: z.int(),
      someTimeWithEverySpace: chance,
    }),
  ),
  firstHourPastLimit: z.int().nullable(),
  bedsToAdd: figures,
  bedsThatDoNotExist: figures,
  shortfallWithEverySpace: z.array(chance),
  smallestChange: z.object({ beds: z.int(), from: instant, to: instant, doNotExist: z.int() }).nullable(),
  boardingOut: z.object({ patients: z.int(), by: instant }).nullable(),
  admittedLeaving: percentiles,
  arrivalsToAdmit: percentiles,
  bedHoursShort: z.object({ mean: z.number(), p90: z.number() }),
  peak: z.object({ p50: z.number(), p90: z.number(), p95: z.number() }),
});

export const outlookResult = z.object({
  engineVersion: z.string(),
  hours: z.array(instant),
  areas: z.array(areaOutlook),
  pooled: needByHour,
  someAreaShort: z.array(chance),
  someAreaShortByShift: z.array(chance),
  arrivalsSoFar: z
    .object({
      counted: z.int(),
      expected: z.number(),
      p10: z.number(),
      p90: z.number(),
      factor: z.number(),
      move: z.number().optional(),
    })
    .nullable(),
  lengthOfStay: z.enum(['exponential', 'empirical']),
  replications: z.int(),
});

export const outlookTrigger = z.enum([
  'census saved',
  'staffed beds changed',
  'model approved',
  'timetable',
  'log accepted',
  'settings changed',
  'recomputed',
]);

/** An issued outlook as it is kept: never changed once issued. */
export const outlook = z.object({
  id,
  issuedAt: instant,
  trigger: outlookTrigger,
  /** The census entries it was computed from, one an area; null where the area had none. */
  census: z.array(
    z.object({
      areaId: id,
      takenAt: instant.nullable(),
      present: z.int().nullable(),
      waiting: z.int().nullable(),
      boarding: z.int().nullable(),
    }),
  ),
  undecided: z.object({ takenAt: instant, waiting: z.int() }).nullable(),
  /** Staffed beds in force, as steps; the first at or before issuedAt. */
  staffedBeds: z.array(z.object({ areaId: id, steps: z.array(z.object({ at: instant, beds: z.int() })) })),
  model: z.object({
    id,
    fittedAt: instant,
    approvedAt: instant.nullable(),
    trainedTo: instant,
    weeksOfHistory: z.number(),
    staysFrom,
  }),
  planningRisk: z.number(),
  seed: z.int(),
  softwareVersion: z.string(),
  computeMilliseconds: z.number(),
  result: outlookResult,
});
export type Outlook = z.infer<typeof outlook>;

/** What was true in an hour that has passed; a figure is given only where a census or a log speaks. */
export const pastHour = z.object({
  at: instant,
  areas: z.array(
    z.object({
      areaId: id,
      present: z.int().nullable(),
      staffed: z.int(),
      source: z.enum(['census', 'log']).nullable(),
    }),
  ),
});

/** A caution that is true now; the page shows it where the decision is made. */
export const caution = z.object({
  kind: z.enum([
    'little history',
    'winter not seen yet',
    'model old',
    'census old',
    'without a census',
    'area not counted',
    'gap in the log',
    'unusual day',
    'model drifted',
    'hourly counts',
  ]),
  text: z.string(),
});
export type Caution = z.infer<typeof caution>;

export const tonight = z.object({
  now: instant,
  outlook: outlook.nullable(),
  /** The outlook is being computed anew. */
  computing: z.boolean(),
  /** Why there is no outlook, and what to do about it. */
  missing: z
    .object({ reason: z.enum(['no model', 'no staffed-bed plan', 'not computed yet']), next: z.string() })
    .nullable(),
  past: z.array(pastHour),
  cautions: z.array(caution),
  /** One line on why the outlook moved since the last, null where there is none. */
  moved: z.string().nullable(),
  /** Acknowledgements of hours past a limit that end no more than half a day ago, oldest first. */
  acknowledgements: z.array(acknowledgement),
  /** The outlook that stood when last night began; null if there was none. */
  lastNight: z.object({ outlookId: id, issuedAt: instant }).nullable(),
});
export type Tonight = z.infer<typeof tonight>;

export const getTonight = defineContract({
  id: 'getTonight',
  method: 'get',
  path: '/api/sites/:siteId/tonight',
  access: 'outlook:read',
  summary: 'The newest outlook of the site, the hours just past and the cautions that hold now.',
  params: siteParams,
  reply: tonight,
});

/** One issued outlook in a list. */
const outlookName = z.object({ id, issuedAt: instant, trigger: outlookTrigger });

export const listOutlooks = defineContract({
  id: 'listOutlooks',
  method: 'get',
  path: '/api/sites/:siteId/outlooks',
  access: 'outlook:read',
  summary: 'The outlooks issued in [from, to), oldest first; at most eight days at once.',
  params: siteParams,
  query: z
    .object({ from: queryInstant, to: queryInstant })
    .refine(({ from, to }) => to > from && to - from <= 8 * 86_400, {
      message: 'To must lie after from, by eight days at most',
      path: ['to'],
    }),
  reply: z.object({ outlooks: z.array(outlookName) }),
});

/** An earlier outlook with what was known before it and what then happened. */
export const outlookThen = z.object({
  outlook,
  /** Full hours from half a day before it to its last hour, or to now; a figure only where a census or a log speaks. */
  past: z.array(pastHour),
  /** Acknowledgements made while it stood, oldest first. */
  acknowledgements: z.array(acknowledgement),
  /** The outlooks issued before and after it. */
  earlier: outlookName.nullable(),
  later: outlookName.nullable(),
});
export type OutlookThen = z.infer<typeof outlookThen>;

export const getOutlookThen = defineContract({
  id: 'getOutlookThen',
  method: 'get',
  path: '/api/sites/:siteId/outlooks/:outlookId/then',
  access: 'outlook:read',
  summary: 'An earlier outlook as it was issued, with what then happened.',
  params: siteParams.extend({ outlookId: id }),
  reply: outlookThen,
});

export const getOutlook = defineContract({
  id: 'getOutlook',
  method: 'get',
  path: '/api/sites/:siteId/outlooks/:outlookId',
  access: 'outlook:read',
  summary: 'An outlook exactly as it was issued.',
  params: siteParams.extend({ outlookId: id }),
  reply: outlook,
});

export const repeatOutlook = defineContract({
  id: 'repeatOutlook',
  method: 'post',
  path: '/api/sites/:siteId/outlooks/:outlookId/repeat',
  access: 'outlook:read',
  summary:
    'Computes an issued outlook again from its stored inputs and says whether every digit is the same. Stores nothing.',
  params: siteParams.extend({ outlookId: id }),
  reply: z.object({ sameDigits: z.boolean(), storedDigest: z.string(), repeatedDigest: z.string() }),
});
