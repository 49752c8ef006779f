import { z } from 'zod';
import { defineContract } from './contract.ts';
import { id, instant, note, siteParams, staysFrom } from './common.ts';

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
  staysFrom,
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

const score = z.number().nullable();
const comparedSide = z.object({
  logScore: score,
  mase: score,
  pinball: score,
  coverage: z.array(z.object({ level: z.number(), observed: score, expected: score, se: score })),
});
const scoreDifference = z.object({ value: z.number(), se: score, monteCarlo: score });
const comparedScale = z.object({
  n: z.int(),
  candidate: comparedSide,
  inUse: comparedSide,
  /** Candidate less the one in use: under 0 the candidate did better. */
  difference: z.object({ logScore: scoreDifference, pinball: scoreDifference }).nullable(),
});
export type ComparedScale = z.infer<typeof comparedScale>;

/** A backtest of a candidate beside the model in use; the meaning of each figure stands with the engine's ModelComparison. */
export const modelComparison = z.object({
  id,
  inUse: z.object({ id, fittedAt: instant.nullable(), fittedBy: z.string() }),
  /** False once another model is in use than the one it was compared with. */
  stillInUse: z.boolean(),
  status: z.enum(['running', 'done', 'failed']),
  createdAt: instant,
  askedBy: z.string(),
  jobId: id,
  error: z.string().nullable(),
  /** Null until it is done. */
  result: z
    .object({
      /** The weeks scored. */
      from: instant,
      to: instant,
      weeks: z.int(),
      weeksAlike: z.int(),
      arrivals: z.array(comparedScale.extend({ level: z.enum(['hour', 'shift', 'day', 'week']) })),
      need: z.array(comparedScale.extend({ leadHours: z.int() })),
      draws: z.int(),
      replications: z.int(),
      batches: z.int(),
      words: z.object({
        headline: z.string(),
        arrivals: z.string(),
        need: z.string(),
        ranges: z.string(),
        grounds: z.string(),
      }),
    })
    .nullable(),
});
export type ModelComparisonReply = z.infer<typeof modelComparison>;

export const getModelComparison = defineContract({
  id: 'getModelComparison',
  method: 'get',
  path: '/api/sites/:siteId/arrival-models/:modelId/comparison',
  access: 'arrival-model:read',
  summary: 'The newest backtest of a model beside the one that was in use; null before the first.',
  params: modelParams,
  reply: z.object({ comparison: modelComparison.nullable(), mayCompare: z.boolean() }),
});

export const compareModel = defineContract({
  id: 'compareArrivalModel',
  method: 'post',
  path: '/api/sites/:siteId/arrival-models/:modelId/comparison',
  access: 'arrival-model:fit',
  summary: 'Backtest a candidate beside the model in use on the site’s own visits, in the background.',
  params: modelParams,
  body: z.object({ weeks: z.int().min(1).max(52).default(13) }),
  status: 202,
  reply: z.object({ comparisonId: id, jobId: id }),
});

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
