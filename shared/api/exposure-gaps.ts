import { z } from 'zod';
import { defineContract } from './contract.ts';
import { id, instant, note, siteParams } from './common.ts';

/** An outage: visits were not recorded. A diversion: patients were sent elsewhere. */
export const exposureGapKinds = ['outage', 'diversion'] as const;

export const exposureGap = z.object({
  id,
  kind: z.enum(exposureGapKinds),
  /** Null: every area. */
  areaId: id.nullable(),
  from: instant,
  until: instant,
  reason: z.string(),
  /** Null if it came with the installation. */
  declaredBy: z.string().nullable(),
  declaredAt: instant.nullable(),
});
export type ExposureGap = z.infer<typeof exposureGap>;

const gapsPath = '/api/sites/:siteId/exposure-gaps';

export const listExposureGaps = defineContract({
  id: 'listExposureGaps',
  method: 'get',
  path: gapsPath,
  access: 'visit-log:read',
  summary: 'Outages and diversions declared, newest first: hours that a model does not learn from.',
  params: siteParams,
  reply: z.object({ gaps: z.array(exposureGap) }),
});

export const declareExposureGap = defineContract({
  id: 'declareExposureGap',
  method: 'post',
  path: gapsPath,
  access: 'visit-log:upload',
  summary: 'Declare an outage or a diversion of one area or all: the next fit leaves its hours out.',
  params: siteParams,
  body: z.object({
    kind: z.enum(exposureGapKinds),
    areaId: id.nullable(),
    from: instant,
    until: instant,
    reason: note.min(3, 'Say why'),
  }),
  status: 201,
  reply: exposureGap,
});

export const removeExposureGap = defineContract({
  id: 'removeExposureGap',
  method: 'delete',
  path: `${gapsPath}/:gapId`,
  access: 'visit-log:upload',
  summary: 'Remove an outage or a diversion that was declared: its hours count again from the next fit on.',
  params: siteParams.extend({ gapId: id }),
  status: 204,
  reply: z.null(),
});
