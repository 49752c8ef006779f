import { z } from 'zod';
import { defineContract } from './contract.ts';
import { id, instant, siteParams } from './common.ts';

const count = z.int('Whole numbers only').min(0, 'Not below 0').max(2000, 'At most 2000');

export const censusArea = z
  .object({ areaId: id, present: count, waiting: count, boarding: count })
  .refine((area) => area.waiting + area.boarding <= area.present, {
    message: 'Waiting and boarding together cannot exceed present',
    path: ['present'],
  });

export const censusBody = z
  .object({
    /** When the patients were counted; not in the future and at most 8 h ago. */
    takenAt: instant,
    /** Areas counted; an area left out keeps its earlier count and that count's age. */
    areas: z.array(censusArea).max(100),
    /** Waiting patients whose area is not decided; null if not counted. */
    undecidedWaiting: count.nullable(),
    /** Ambulances holding outside, part of undecidedWaiting; null if not counted. */
    ambulancesHolding: count.nullable(),
    /** Arrivals since local midnight, if known. */
    arrivalsSinceMidnight: count.nullable(),
  })
  .refine((body) => new Set(body.areas.map((area) => area.areaId)).size === body.areas.length, {
    message: 'Each area once',
    path: ['areas'],
  })
  .refine((body) => body.areas.length > 0 || body.undecidedWaiting !== null || body.arrivalsSinceMidnight !== null, {
    message: 'Enter at least one figure',
    path: ['areas'],
  });
export type CensusBody = z.infer<typeof censusBody>;

export const census = z.object({
  /** The newest count of each area, each with its own time; areas never counted are absent. */
  areas: z.array(
    z.object({
      areaId: id,
      takenAt: instant,
      present: z.int(),
      waiting: z.int(),
      boarding: z.int(),
      enteredBy: z.string(),
    }),
  ),
  undecided: z.object({ takenAt: instant, waiting: z.int(), ambulancesHolding: z.int().nullable() }).nullable(),
  arrivalsSinceMidnight: z.object({ takenAt: instant, count: z.int() }).nullable(),
});
export type Census = z.infer<typeof census>;

export const getCensus = defineContract({
  id: 'getCensus',
  method: 'get',
  path: '/api/sites/:siteId/census',
  access: 'outlook:read',
  summary: 'The newest count of every care area.',
  params: siteParams,
  reply: census,
});

export const enterCensus = defineContract({
  id: 'enterCensus',
  method: 'post',
  path: '/api/sites/:siteId/censuses',
  access: 'census:enter',
  token: 'census',
  summary: 'Enter a census; the outlook is computed anew and its id returned.',
  params: siteParams,
  body: censusBody,
  status: 201,
  reply: z.object({
    censusId: id,
    outlookId: id.nullable(),
    /** Why no outlook was computed. */ reason: z.string().nullable(),
  }),
});
