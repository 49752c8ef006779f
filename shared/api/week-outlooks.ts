import { z } from 'zod';
import { id, instant, queryInstant, siteParams, staysFrom } from './common.ts';
import { defineContract } from './contract.ts';
import { caution } from './outlooks.ts';

const figures = z.array(z.number());
const shares = z.array(z.number().min(0).max(1));
const share = z.number().min(0).max(1);
const span = z.object({ name: z.string(), from: instant, to: instant });

const countColumns = z.object({
  mean: figures,
  p2_5: figures,
  p10: figures,
  p25: figures,
  p50: figures,
  p75: figures,
  p90: figures,
  p97_5: figures,
});
const needColumns = countColumns.extend({ p5: figures, p95: figures });
const peak = z.object({
  mean: z.number(),
  p2_5: z.number(),
  p5: z.number(),
  p10: z.number(),
  p25: z.number(),
  p50: z.number(),
  p75: z.number(),
  p90: z.number(),
  p95: z.number(),
  p97_5: z.number(),
});
const arrivalTable = z.object({
  spans: z.array(span),
  total: countColumns,
  areas: z.array(countColumns),
  ambulance: countColumns.nullable(),
});
const admissions = z.object({ admittedLeaving: countColumns, arrivalsToAdmit: countColumns });
const needByHour = z.object({ need: needColumns, staffed: figures, shortfall: shares, shortfallWithin: shares });

/** One area in one shift; the meaning of each figure stands with the engine's result type. */
export const weekShiftNeed = z.object({
  peak,
  staffedLeast: z.int(),
  staffedMost: z.int(),
  someTime: share,
  headroom: z.int(),
  bedsForPlanningRisk: z.int(),
  bedsToStaff: z.int(),
  bedsToAdd: z.int(),
  bedsThatDoNotExist: z.int(),
  someTimeWithEverySpace: share,
  nurseHours: z.number().nullable(),
  lastChanceAt: instant,
});

export const weekOutlookResult = z.object({
  engineVersion: z.string(),
  replications: z.int(),
  planningRisk: z.number(),
  hours: z.array(instant),
  shifts: z.array(span),
  days: z.array(span),
  arrivals: z.object({ hours: arrivalTable, shifts: arrivalTable, days: arrivalTable, weeks: arrivalTable }),
  areas: z.array(needByHour.extend({ areaId: id, counted: z.boolean(), shifts: z.array(weekShiftNeed), admissions })),
  department: z.object({
    pooled: needByHour,
    someAreaShort: shares,
    shifts: z.array(
      z.object({
        peak,
        staffedLeast: z.int(),
        staffedMost: z.int(),
        someAreaShort: share,
        pooledShort: share,
      }),
    ),
    admissions,
  }),
  calendar: z.array(
    z.object({
      date: z.string(),
      name: z.string(),
      kind: z.enum(['public holiday', 'local event', 'closure']),
      from: instant,
      to: instant,
      effect: z.number(),
      low: z.number(),
      high: z.number(),
      basis: z.enum(['learned', 'stated', 'not known']),
      pastDays: z.int(),
    }),
  ),
  ordinaryWeek: z.array(figures),
  /** Waits for a bed space against the site's limit; null where it has stated none, absent in outlooks of before. */
  waits: z
    .object({
      limitMinutes: z.int(),
      share,
      replications: z.int(),
      areas: z.array(
        z
          .array(
            z.object({
              arrivals: z.number(),
              meanMinutes: z.number().nullable(),
              overLimit: share.nullable(),
              bedsToAdd: z.int().nullable(),
            }),
          )
          .nullable(),
      ),
    })
    .nullish(),
  lengthOfStay: z.enum(['exponential', 'empirical']),
});

export const weekOutlookTrigger = z.enum(['first', 'daily', 'what it stands on changed', 'recomputed']);

/** An issued week outlook as it is kept: never changed once issued. */
export const weekOutlook = z.object({
  id,
  issuedAt: instant,
  trigger: weekOutlookTrigger,
  planVersion: z.int(),
  model: z.object({ id, fittedAt: instant, trainedTo: instant, weeksOfHistory: z.number(), staysFrom }),
  seed: z.int(),
  softwareVersion: z.string(),
  computeMilliseconds: z.number(),
  result: weekOutlookResult,
});
export type WeekOutlook = z.infer<typeof weekOutlook>;

/** Last week as it was forecast, against what came; a count only where an accepted log speaks. */
export const lastWeek = z.object({
  outlookId: id,
  issuedAt: instant,
  /** Made afterwards, from what was known then: none had been issued. */
  recomputed: z.boolean(),
  days: z.array(
    z.object({
      date: z.string(),
      from: instant,
      to: instant,
      p2_5: z.number(),
      p10: z.number(),
      p25: z.number(),
      p50: z.number(),
      p75: z.number(),
      p90: z.number(),
      p97_5: z.number(),
      count: z.int().nullable(),
    }),
  ),
});
export type LastWeek = z.infer<typeof lastWeek>;

/** What the Week ahead page shows. */
export const weekAhead = z.object({
  now: instant,
  outlook: weekOutlook.nullable(),
  /** A newer one is waited for: asked for, or being computed. */
  computing: z.boolean(),
  /** Why there is none, and what to do about it. */
  missing: z
    .object({
      reason: z.enum(['no model', 'little history', 'no staffed-bed plan', 'not computed yet']),
      next: z.string(),
    })
    .nullable(),
  cautions: z.array(caution),
  /** Who saved the plan that the outlook stands on, and when. */
  plan: z.object({ version: z.int(), savedAt: instant, savedBy: z.string() }).nullable(),
  /** The shifts before the one under way, oldest first: highest count at a full hour, null where neither a census nor a log speaks. */
  past: z.array(
    span.extend({
      /** Of all areas together. */
      most: z.int().nullable(),
      areas: z.array(z.object({ areaId: id, most: z.int().nullable(), staffed: z.int() })),
    }),
  ),
  /** Arrivals that came in the hours of the last eight days, oldest first; null where no accepted log speaks. */
  actual: z.array(z.object({ from: instant, to: instant, count: z.int().nullable() })),
  /** Null where no week outlook was issued a week ago. */
  lastWeek: lastWeek.nullable(),
});
export type WeekAhead = z.infer<typeof weekAhead>;

export const getWeekAhead = defineContract({
  id: 'getWeekAhead',
  method: 'get',
  path: '/api/sites/:siteId/week-outlooks/latest',
  access: 'outlook:read',
  summary:
    'The newest outlook of the fourteen days ahead, last week against what came, and the cautions that hold now.',
  params: siteParams,
  reply: weekAhead,
});

export const listWeekOutlooks = defineContract({
  id: 'listWeekOutlooks',
  method: 'get',
  path: '/api/sites/:siteId/week-outlooks',
  access: 'outlook:read',
  summary: 'The week outlooks issued in [from, to), oldest first; at most 100 days at once.',
  params: siteParams,
  query: z
    .object({ from: queryInstant, to: queryInstant })
    .refine(({ from, to }) => to > from && to - from <= 100 * 86_400, {
      message: 'To must lie after from, by 100 days at most',
      path: ['to'],
    }),
  reply: z.object({ outlooks: z.array(z.object({ id, issuedAt: instant, trigger: weekOutlookTrigger })) }),
});

export const getWeekOutlook = defineContract({
  id: 'getWeekOutlook',
  method: 'get',
  path: '/api/sites/:siteId/week-outlooks/:weekOutlookId',
  access: 'outlook:read',
  summary: 'One issued week outlook, exactly as it was issued, and the shifts before it.',
  params: siteParams.extend({ weekOutlookId: id }),
  reply: weekOutlook.extend({ past: weekAhead.shape.past }),
});
