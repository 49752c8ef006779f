import { z } from 'zod';
import type { VisitColumn } from '../domain/visit-row.ts';
import { arrivalMeanings, areaMeanings } from '../domain/extract-meaning.ts';
import { defineContract } from './contract.ts';
import { id, instant, siteParams } from './common.ts';

const text = z.string().min(1).max(200);
const header = text.nullable();

/** How many values of one column are remembered at most; a column with more is no list of words. */
const mostValues = 100;

const code = z.int().min(0).max(255).nullable();

/** How the last accepted file of a site was read, so that the next need not be explained again. */
export const rememberedMapping = z.object({
  /** Header of the file's column for each of ours; null where there was none. */
  columns: z.object({
    arrival_at: header,
    bed_space_at: header,
    admission_decision_at: header,
    departure_at: header,
    care_area: header,
    disposition: header,
    arrived_by_ambulance: header,
  } satisfies Record<VisitColumn, typeof header>),
  /** How its dates were read; null if no date could be read in two ways. */
  dateOrder: z.enum(['day first', 'month first']).nullable(),
  repeatedHour: z.enum(['refuse', 'earlier', 'later']),
  /** What each value means; null leaves its rows out. */
  areas: z.array(z.object({ value: text, areaId: id.nullable() })).max(mostValues),
  dispositions: z.array(z.object({ value: text, code })).max(mostValues),
  ambulances: z.array(z.object({ value: text, code })).max(mostValues),
  selectedBy: z.enum(['arrived', 'departed']),
  /** Null if no departure was missing, so that nobody was asked. */
  missingDeparture: z.enum(['still present', 'unknown']).nullable(),
  arrivalMeaning: z.enum(arrivalMeanings).nullable(),
  areaMeaning: z.enum(areaMeanings).nullable(),
});
export type RememberedMapping = z.infer<typeof rememberedMapping>;

export const getVisitLogMapping = defineContract({
  id: 'getVisitLogMapping',
  method: 'get',
  path: '/api/sites/:siteId/visit-log-mapping',
  access: 'visit-log:upload',
  summary:
    'How the last accepted visit log was read: columns by header, values, date order, answers. Null before the first.',
  params: siteParams,
  reply: z.object({
    remembered: z.object({ mapping: rememberedMapping, savedBy: z.string(), savedAt: instant }).nullable(),
  }),
});
