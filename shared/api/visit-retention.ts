import { z } from 'zod';
import { defineContract } from './contract.ts';
import { instant, siteParams } from './common.ts';

/** How long visits are kept, days after the arrival. The default of three years is common practice, without a source. */
export const retentionDays = { least: 60, most: 3653, usual: 1095 } as const;

const path = '/api/sites/:siteId/visit-retention';

export const visitRetention = z.object({
  days: z.int(),
  /** Visits that arrived before it are deleted; the start of a local day. */
  keptFrom: instant,
  /** First arrival day of any visit still kept; null if there is none. */
  oldest: instant.nullable(),
});
export type VisitRetention = z.infer<typeof visitRetention>;

export const getVisitRetention = defineContract({
  id: 'getVisitRetention',
  method: 'get',
  path,
  access: 'visit-log:read',
  summary: 'How long visits are kept after the arrival, and from which day on there are any.',
  params: siteParams,
  reply: visitRetention,
});

export const setVisitRetention = defineContract({
  id: 'setVisitRetention',
  method: 'put',
  path,
  access: 'visit-log:upload',
  summary:
    'Set how long visits are kept. Older ones are deleted in the background, for good; models, forecasts and scores stay.',
  params: siteParams,
  body: z.object({
    days: z
      .int('Whole days')
      .min(retentionDays.least, `At least ${String(retentionDays.least)} days`)
      .max(retentionDays.most, `At most ${retentionDays.most.toLocaleString('en')} days`),
  }),
  reply: visitRetention,
});
