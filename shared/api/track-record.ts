import { z } from 'zod';
import { defineContract } from './contract.ts';
import { id, instant, siteParams } from './common.ts';

export const trackMeasures = ['need', 'peak', 'arrivals', 'shift arrivals'] as const;
export const trackWeeks = [13, 26, 52, 104] as const;

/** What of the record is looked at; the same in the page's address and in the request. */
export const trackFilter = z.object({
  /** Need some hours ahead, the highest need of a shift, or the arrivals of a day or a shift. */
  measure: z.enum(trackMeasures).default('need'),
  /** Hours ahead; where a measure has no scores so far ahead, the nearest that it has is shown. */
  lead: z.coerce.number<number>().int().min(0).max(168).default(4),
  /** A care area's id; empty for the whole department. */
  area: z.union([id, z.literal('')]).default(''),
  /** A shift's name; empty for all. */
  shift: z.string().max(60).default(''),
  /** An approved model's id; empty for all. */
  model: z.union([id, z.literal('')]).default(''),
  weeks: z.coerce
    .number<number>()
    .int()
    .refine((value) => (trackWeeks as readonly number[]).includes(value), { message: '13, 26, 52 or 104 weeks' })
    .default(52),
});
export type TrackFilter = z.infer<typeof trackFilter>;

const figure = z.number().nullable();
const rule = z.object({ n: z.int(), mase: figure, pinball: figure, ownPinball: figure });
const weekRule = z.object({ mase: figure, pinball: figure });

/** What the scores say together; the meaning of each figure stands with the engine's RecordSummary. */
export const recordSummary = z.object({
  n: z.int(),
  weeks: z.int(),
  logScore: figure,
  meanError: figure,
  mase: figure,
  floorMase: figure,
  pinball: z.object({ value: figure, se: figure }),
  floorPinball: figure,
  baselines: z.object({ lastWeek: rule, fourWeeks: rule, year: rule }),
  coverage: z.array(z.object({ level: z.number(), observed: figure, expected: figure, se: figure })),
  pit: z.array(z.number()),
  pitN: z.int(),
  chances: z.array(
    z.object({
      from: z.number(),
      to: z.number(),
      n: z.int(),
      meanChance: z.number(),
      share: z.number(),
      se: figure,
    }),
  ),
  calledFor: z.object({ n: z.int(), meanChance: figure, share: figure, se: figure }),
  brier: figure,
});

const sentences = z.object({
  headline: z.string(),
  coverage: z.string(),
  chances: z.string(),
  accuracy: z.string(),
  pit: z.string(),
  parts: z.string(),
  acknowledged: z.string(),
});

const part = z.object({
  /** The value of the filter that shows it alone. */
  key: z.string(),
  name: z.string(),
  n: z.int(),
  coverage90: figure,
  expected90: figure,
  se: figure,
  mase: figure,
  floorMase: figure,
  meanChance: figure,
  share: figure,
});
export type RecordPart = z.infer<typeof part>;

export const driftFinding = z.object({
  series: z.enum(['arrivals', 'need']),
  kind: z.enum(['more than forecast', 'fewer than forecast', 'ranges too narrow']),
  foundAt: instant,
  since: instant,
  ratio: z.number(),
  text: z.string(),
});

/** What the watch over a model's scores found; `findings` is empty while nothing stands out. */
export const drift = z.object({
  modelId: id,
  /** Whole weeks with enough scores to be looked at. */
  weeks: z.int(),
  foundAt: instant.nullable(),
  findings: z.array(driftFinding),
});
export type Drift = z.infer<typeof drift>;

/** Outlooks by how far they are scored. */
const outlookCounts = {
  issued: z.int(),
  scored: z.int(),
  waiting: z.int(),
  withdrawn: z.int(),
  notRecorded: z.int(),
  overtaken: z.int(),
  /** Issued before the distributions behind an outlook were kept. */
  withoutLaws: z.int(),
  recomputed: z.int(),
};

export const trackRecord = z.object({
  filter: z.object({
    measure: z.enum(trackMeasures),
    lead: z.int(),
    area: z.string(),
    shift: z.string(),
    model: z.string(),
    weeks: z.int(),
  }),
  areas: z.array(z.object({ id, name: z.string() })),
  shifts: z.array(z.string()),
  /** What of the measure is scored, by hours ahead; 0 is the last outlook before a shift or day. */
  leads: z.array(z.int()),
  models: z.array(z.object({ id, name: z.string() })),
  /** Every outlook ever issued for the site, by how far it is scored; none is left out. */
  outlooks: z.object({
    ...outlookCounts,
    replicationsRecomputed: z.int().nullable(),
    firstAt: instant.nullable(),
  }),
  /** The same of the week ahead; one that was not issued by the daily timetable counts as overtaken. */
  weekOutlooks: z.object(outlookCounts),
  summary: recordSummary,
  /** Hours and shifts whose risk somebody acknowledged ('yes'), the others ('no') and both ('all'); empty where nobody did. */
  acknowledged: z.array(part),
  verdict: sentences,
  byWeek: z.array(
    z.object({
      week: z.int(),
      from: instant,
      n: z.int(),
      mase: figure,
      floorMase: figure,
      pinball: figure,
      floorPinball: figure,
      baselines: z.object({ lastWeek: weekRule, fourWeeks: weekRule, year: weekRule }),
      coverage90: figure,
      expected90: figure,
    }),
  ),
  parts: z.object({ lead: z.array(part), area: z.array(part), shift: z.array(part), model: z.array(part) }),
  /** The newest scores, newest first; at most 90. */
  points: z.array(
    z.object({
      outlookId: id.nullable(),
      weekOutlookId: id.nullable(),
      from: instant,
      to: instant,
      observed: z.int(),
      median: figure,
      low90: figure,
      high90: figure,
      low50: figure,
      high50: figure,
      chance: figure,
      short: z.boolean().nullable(),
      acknowledged: z.boolean(),
      recomputed: z.boolean(),
    }),
  ),
  drift: drift.nullable(),
  /** The job that recomputes past weeks, while it waits or runs. */
  recomputing: id.nullable(),
});
export type TrackRecord = z.infer<typeof trackRecord>;

export const getTrackRecord = defineContract({
  id: 'getTrackRecord',
  method: 'get',
  path: '/api/sites/:siteId/track-record',
  access: 'outlook:read',
  summary: 'How past forecasts did: coverage, reliability, losses beside rules of the past, and every outlook counted.',
  params: siteParams,
  query: trackFilter,
  reply: trackRecord,
});

export const getTrackRecordCsv = defineContract({
  id: 'getTrackRecordCsv',
  method: 'get',
  path: '/api/sites/:siteId/track-record.csv',
  access: 'outlook:read',
  summary: 'The scores under a filter as CSV, one line a score, cautions in the first lines.',
  params: siteParams,
  query: trackFilter,
  replyType: 'text/csv; charset=utf-8',
  reply: z.string(),
});

export const getDrift = defineContract({
  id: 'getDrift',
  method: 'get',
  path: '/api/sites/:siteId/track-record/drift',
  access: 'outlook:read',
  summary: 'What the watch over the scores of the model in use found; null without a model.',
  params: siteParams,
  reply: z.object({ drift: drift.nullable() }),
});

export const recomputeRecord = defineContract({
  id: 'recomputeTrackRecord',
  method: 'post',
  path: '/api/sites/:siteId/track-record/recomputation',
  access: 'arrival-model:fit',
  summary: 'Recompute past weeks of the record from what was known at the time, in the background.',
  params: siteParams,
  body: z.object({ weeks: z.int().min(4).max(104) }),
  status: 202,
  reply: z.object({ jobId: id }),
});
