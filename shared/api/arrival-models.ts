import { z } from 'zod';
import { defineContract } from './contract.ts';
import { id, instant, note, siteParams } from './common.ts';

export const modelStatus = z.enum(['fitting', 'candidate', 'in use', 'retired', 'failed']);

const figures = z.array(z.number());

/** One finding of the diagnostics: an effect size and what it means, in words. */
export const finding = z.object({ name: z.string(), size: z.string(), meaning: z.string(), concern: z.boolean() });

/** The model as pages show it; the parameters themselves stay on the server. */
export const modelSummary = z.object({
  id,
  status: modelStatus,
  /** Null while it is being fitted. */
  fittedAt: instant.nullable(),
  fittedBy: z.string(),
  approvedAt: instant.nullable(),
  approvedBy: z.string().nullable(),
  retiredAt: instant.nullable(),
  reason: z.string().nullable(),
  trainedFrom: instant.nullable(),
  trainedTo: instant.nullable(),
  visits: z.int(),
  weeksOfHistory: z.number(),
  /** When its level was last moved on by newer visits, without a new fit. */
  refreshedAt: instant.nullable(),
  /** Why a fit failed. */
  error: z.string().nullable(),
  jobId: id.nullable(),
  /** The person who fitted it may not approve it. */
  fittedByCaller: z.boolean(),
  /** What has changed since about the visits that it was fitted on; a new fit would not see them, or not so. */
  sinceFit: z.object({
    /** File names of logs withdrawn. */
    withdrawnLogs: z.array(z.string()),
    /** Outages and diversions declared within its time. */
    gapsDeclared: z.int(),
  }),
});
export type ModelSummary = z.infer<typeof modelSummary>;

export const modelDetail = modelSummary.extend({
  engineVersion: z.string(),
  /** Logs it was fitted on. */
  lineage: z.array(z.object({ logId: id, fileName: z.string(), sha256: z.string(), rows: z.int() })),
  settings: z.record(z.string(), z.union([z.string(), z.number(), z.boolean(), z.null()])),
  areas: z.array(
    z.object({
      areaId: id,
      name: z.string(),
      /** Arrivals an hour at the level of now, for the 168 hours of the week, Monday 00:00 first. */
      ratePerHour: figures,
      /** 95 % interval of each rate: its own posterior interval. */
      rateLow: figures,
      rateHigh: figures,
    }),
  ),
  streams: z.array(
    z.object({
      areaId: id,
      disposition: z.string(),
      visits: z.int(),
      /** Share of the area's arrivals. */
      share: z.number(),
      /** Mean length of stay, hours, under the plain exponential; 95 % limits by the χ² relation. */
      meanHours: z.number(),
      meanLow: z.number(),
      meanHigh: z.number(),
      /** Rows cut at the cap or still present. */
      censored: z.int(),
      /** Departures per present patient and hour by block of the day, relative to the mean (1 = as on average). */
      departureFactor: figures,
    }),
  ),
  departureBlocks: z.array(z.string()),
  variation: z.object({
    /** Day-to-day coefficient of variation of the arrival rate shared by all areas. */
    sharedDayCv: z.number(),
    dayCorrelation: z.number(),
    outflowCv: z.number(),
    outflowCorrelation: z.number(),
    structure: z.string(),
  }),
  findings: z.array(finding),
});
export type ModelDetail = z.infer<typeof modelDetail>;

const modelParams = siteParams.extend({ modelId: id });

export const listModels = defineContract({
  id: 'listArrivalModels',
  method: 'get',
  path: '/api/sites/:siteId/arrival-models',
  access: 'arrival-model:read',
  summary: 'Arrival models of the site: the one in use, candidates and earlier ones.',
  params: siteParams,
  reply: z.object({ models: z.array(modelSummary), readyLogs: z.int() }),
});

export const getModel = defineContract({
  id: 'getArrivalModel',
  method: 'get',
  path: '/api/sites/:siteId/arrival-models/:modelId',
  access: 'arrival-model:read',
  summary: 'One arrival model: rates with intervals, length of stay and departures, variation, findings, lineage.',
  params: modelParams,
  reply: modelDetail,
});

export const fitModel = defineContract({
  id: 'fitArrivalModel',
  method: 'post',
  path: '/api/sites/:siteId/arrival-models',
  access: 'arrival-model:fit',
  summary: 'Fit a candidate model on the accepted logs, or on some of them, in the background.',
  params: siteParams,
  body: z.object({
    /** Only these logs, as if there were no others; left out: all that count. */
    logIds: z.array(id).min(1, 'Choose a log').max(1000).optional(),
  }),
  status: 202,
  reply: z.object({ modelId: id, jobId: id }),
});

export const approveModel = defineContract({
  id: 'approveArrivalModel',
  method: 'post',
  path: '/api/sites/:siteId/arrival-models/:modelId/approval',
  access: 'arrival-model:approve',
  summary: 'Put a candidate into use; the one in use is retired. Never by the person who fitted it.',
  params: modelParams,
  body: z.object({ reason: note.min(3, 'Say why') }),
  reply: modelSummary,
});

export const retireModel = defineContract({
  id: 'retireArrivalModel',
  method: 'post',
  path: '/api/sites/:siteId/arrival-models/:modelId/retirement',
  access: 'arrival-model:approve',
  summary: 'Retire a candidate, or the model in use: Tonight then has no outlook until another is approved.',
  params: modelParams,
  body: z.object({ reason: note.min(3, 'Say why') }),
  reply: modelSummary,
});
