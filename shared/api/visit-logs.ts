import { z } from 'zod';
import { arrivalMeanings, areaMeanings } from '../domain/extract-meaning.ts';
import { heapedColumns } from '../domain/file-study.ts';
import { rowProblems, visitColumns, type RowProblem } from '../domain/visit-row.ts';
import { defineContract } from './contract.ts';
import { id, instant, note, siteParams } from './common.ts';
import { rememberedMapping } from './visit-log-mapping.ts';

/** Limits of an upload; the browser tells them, the server enforces them. */
export const visitLogLimits = {
  /** Of the text, unpacked, in bytes. */
  bytes: 1_000_000_000,
  /** A checked file waits so long for its acceptance, seconds. */
  checkKeptFor: 3600,
  /** File names are cut to this. */
  fileName: 120,
} as const;

const rowProblem = z.enum(Object.keys(rowProblems) as [RowProblem, ...RowProblem[]]);
const count = z.int().min(0);

export const problemCount = z.object({
  problem: rowProblem,
  column: z.enum(visitColumns).nullable(),
  rows: count,
  /** Row numbers of the first few, 1 for the first row after the header. */
  examples: z.array(count),
});

const span = { from: instant, to: instant };

/** What the times of a file say about it; an area of null is the whole site. */
export const visitLogStudy = z.object({
  /** Hours with implausibly no arrivals, and how many were expected. */
  gaps: z.array(z.object({ areaId: id.nullable(), ...span, expected: z.number() })),
  /** Sudden changes of level: arrivals a week, the four weeks before and after. */
  levelShifts: z.array(z.object({ areaId: id.nullable(), at: instant, before: z.number(), after: z.number() })),
  /** Minutes of the day on which implausibly many times stand. */
  heaps: z.array(
    z.object({
      column: z.enum(heapedColumns),
      kind: z.enum(['full hour', 'end of day', 'shift end']),
      minute: z.int().nullable(),
      times: count,
      expected: z.number(),
    }),
  ),
});

/** What the check of an uploaded file found; it holds no visit. */
export const visitLogKind = z.enum(['visits', 'hourly counts']);

export const visitLogCheck = z.object({
  checkId: id,
  kind: visitLogKind,
  /** Care areas of hourly counts: their mean stays have to be stated, since counts do not tell them. */
  needsMean: z.array(id),
  /** The file is deleted then, unless it was accepted. */
  keptUntil: instant,
  fileName: z.string(),
  sha256: z.string(),
  bytes: count,
  rows: count,
  goodRows: count,
  problemRows: count,
  problems: z.array(problemCount),
  /** Good rows that equal another in every column: a warning, since true twins exist. */
  identicalRows: count,
  /** The period that the log will state, whole local days, UTC seconds; null without good rows. */
  period: z.object({ from: instant, to: instant }).nullable(),
  study: visitLogStudy.nullable(),
  /** What accepting would change: rows and hours newly covered, and hours of which logs it would replace. */
  accepting: z
    .object({
      newRows: count,
      newHours: z.number(),
      replaces: z.array(z.object({ id, hours: z.number() })),
    })
    .nullable(),
  lastTimeAt: instant.nullable(),
  visitsByArea: z.array(z.object({ areaId: id, name: z.string(), visits: count })),
  recorded: z.object({
    departure: count,
    bedSpace: count,
    admissionDecision: count,
    disposition: count,
    byAmbulance: count,
  }),
});
export type VisitLogCheck = z.infer<typeof visitLogCheck>;

/** The facts that decide how the rows are counted and what they mean. */
export const extractFacts = z.object({
  /** Whether the extract holds the visits that arrived, or those that departed, in its period. */
  selectedBy: z.enum(['arrived', 'departed']),
  takenAt: instant,
  /** What a row without a departure time means. */
  missingDeparture: z.enum(['still present', 'unknown']),
  /** What the arrival time marks; null if nobody was asked. */
  arrivalMeaning: z.enum(arrivalMeanings).nullable().default(null),
  /** Which of a visit's areas its care area is; null if nobody was asked. */
  areaMeaning: z.enum(areaMeanings).nullable().default(null),
});
export type ExtractFactsInput = z.infer<typeof extractFacts>;

/** Longest mean stay that may be stated, hours. */
export const longestStatedMean = 72;

/** Mean length of stay, of hourly counts: hours by care area, and where the figures are from. */
export const statedStays = z.object({
  source: note.min(3, 'Say where the figures are from'),
  areas: z
    .array(z.object({ areaId: id, meanHours: z.number().min(0.1).max(longestStatedMean) }))
    .min(1)
    .max(255),
});
export type StatedStaysInput = z.infer<typeof statedStays>;

/** Rows left out: how many, and by kind of problem; a row may have several. */
const leftOut = z.object({
  rows: count,
  kinds: z.array(z.object({ problem: z.string().min(1).max(60), rows: z.int().min(1) })).max(100),
});

export const visitLogStatus = z.enum(['loading', 'ready', 'withdrawn', 'failed', 'purged']);

export const visitLogSummary = z.object({
  id,
  kind: visitLogKind,
  status: visitLogStatus,
  fileName: z.string(),
  rows: count,
  /** Arrivals of the log lie in it, UTC seconds. */
  period: z.object({ from: instant, to: instant }),
  /** Visits that arrived before it were deleted after the retention time; null if none was. */
  purgedTo: instant.nullable(),
  /** The parts of the period that no newer log covers: only visits that arrived in them count. */
  counts: z.array(z.object({ from: instant, to: instant })),
  leftOutRows: count,
  uploadedBy: z.string(),
  uploadedAt: instant,
  readyAt: instant.nullable(),
  withdrawnBy: z.string().nullable(),
  withdrawnAt: instant.nullable(),
  /** Why it was withdrawn, or why loading failed. */
  reason: z.string().nullable(),
  jobId: id.nullable(),
});
export type VisitLogSummary = z.infer<typeof visitLogSummary>;

export const visitLogDetail = visitLogSummary.extend({
  sha256: z.string(),
  facts: extractFacts,
  /** Mean stays that the site states; null where visits tell them. */
  statedStays: z
    .object({
      source: z.string(),
      areas: z.array(z.object({ areaId: id, name: z.string(), meanHours: z.number() })),
    })
    .nullable(),
  /** By kind of problem; a row may have several. */
  leftOut: z.array(z.object({ problem: z.string(), rows: count })),
  visitsByArea: z.array(z.object({ areaId: id, name: z.string(), visits: count })),
});
export type VisitLogDetail = z.infer<typeof visitLogDetail>;

const logsPath = '/api/sites/:siteId/visit-logs';
const logParams = siteParams.extend({ logId: id });

export const listVisitLogs = defineContract({
  id: 'listVisitLogs',
  method: 'get',
  path: logsPath,
  access: 'visit-log:read',
  summary: 'Visit logs of the site, newest first. A visit is never shown.',
  params: siteParams,
  reply: z.object({ logs: z.array(visitLogSummary) }),
});

export const getVisitLog = defineContract({
  id: 'getVisitLog',
  method: 'get',
  path: `${logsPath}/:logId`,
  access: 'visit-log:read',
  summary: 'One visit log: period, facts, rows by area, rows left out by kind of problem.',
  params: logParams,
  reply: visitLogDetail,
});

export const checkVisitLog = defineContract({
  id: 'checkVisitLog',
  method: 'post',
  path: `${logsPath}/checks`,
  access: 'visit-log:upload',
  token: 'visit-log',
  summary:
    'Send a visit log for checking: the body is CSV (text/csv), or the same gzipped (application/gzip), at most 1 GB unpacked; one row a visit, or one row an hour and care area (hourly counts, told by the header). A file with anything that could identify a patient is refused and not kept.',
  params: siteParams,
  query: z.object({ fileName: z.string().max(400).default('visit-log.csv') }),
  streamedBody: 'text/csv',
  status: 201,
  reply: visitLogCheck,
});

export const discardVisitLogCheck = defineContract({
  id: 'discardVisitLogCheck',
  method: 'delete',
  path: `${logsPath}/checks/:checkId`,
  access: 'visit-log:upload',
  summary: 'Delete a checked file that is not wanted.',
  params: siteParams.extend({ checkId: id }),
  status: 204,
  reply: z.null(),
});

export const getProblemRows = defineContract({
  id: 'getVisitLogProblemRows',
  method: 'get',
  path: `${logsPath}/checks/:checkId/problem-rows`,
  access: 'visit-log:upload',
  summary:
    'The problem rows of a checked file as CSV: row number (1 for the first after the header), column, kind; never a value. As long as the check is kept.',
  params: siteParams.extend({ checkId: id }),
  query: z.object({ kind: rowProblem.optional() }),
  replyType: 'text/csv',
  reply: z.string(),
});

export const acceptVisitLog = defineContract({
  id: 'acceptVisitLog',
  method: 'post',
  path: logsPath,
  access: 'visit-log:upload',
  token: 'visit-log',
  summary: 'Accept a checked file: its rows are loaded in the background, all or none.',
  params: siteParams,
  body: z.object({
    checkId: id,
    /** Load the good rows although others were left out; false refuses a file with any problem row. */
    goodRowsOnly: z.boolean(),
    facts: extractFacts,
    /** Rows that the sender itself left out before sending. */
    leftOutBeforeSending: leftOut.default({ rows: 0, kinds: [] }),
    /** Needed for hourly counts. */
    statedStays: statedStays.optional(),
    /** How the file was read before sending; remembered for the site's next upload. */
    mapping: rememberedMapping.optional(),
  }),
  status: 202,
  reply: z.object({ logId: id, jobId: id }),
});

export const withdrawVisitLog = defineContract({
  id: 'withdrawVisitLog',
  method: 'post',
  path: `${logsPath}/:logId/withdrawal`,
  access: 'visit-log:upload',
  summary: 'Withdraw a log: its visits stop counting at once and are deleted in the background.',
  params: logParams,
  body: z.object({ reason: note.min(3, 'Say why') }),
  reply: visitLogDetail,
});
