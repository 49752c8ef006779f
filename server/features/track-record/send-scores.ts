import { Readable } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import Papa from 'papaparse';
import type { EntityManager } from 'typeorm';
import type { getTrackRecordCsv as contract, TrackFilter } from '../../../shared/api/track-record.ts';
import { localDate, localParts, makeZone, type Zone } from '../../../shared/domain/zoned-time.ts';
import { leadInWords, type RecordMeasure } from '../../../shared/domain/record-lead.ts';
import { meanPinball } from '../../../shared/forecasting/score-issued.ts';
import { readAreas } from '../../database/read-site.ts';
import type { SiteContext } from '../../http/route.ts';
import { filterCondition } from './read-points.ts';
import { nearestLead, readLeads } from './week-sums.ts';

const rowsPerRead = 500;
const cautions = [
  'Planning aid. Not for decisions about any individual patient. Follow your hospital’s clinical governance, escalation policy and local law; a licensed clinician’s judgement comes first.',
  'How past forecasts did says nothing of a major incident or a sudden closure. A low chance is not a reason to staff below the safe minimum.',
  'A chance is held against the staffed beds that its outlook was issued with. Hours that somebody acknowledged are marked: what was done may have changed what came.',
];
const columns = [
  'outlook',
  'measure',
  'area',
  'how far ahead',
  'shift',
  'from',
  'to',
  'observed',
  'median',
  'low 90',
  'high 90',
  'mass of 90',
  'chance of shortfall',
  'shortfall',
  'log score',
  'mean pinball loss',
  'absolute error',
  'error of a week before',
  'randomised PIT',
  'acknowledged',
  'recomputed',
  'model',
];

interface Row {
  id: number;
  outlookId: string | null;
  weekOutlookId: string | null;
  measure: RecordMeasure;
  areaId: string;
  leadHours: number;
  shift: string;
  fromAt: number;
  toAt: number;
  observed: number;
  median: number | null;
  intervals: string | null;
  chance: number | null;
  short: number | null;
  logScore: number | null;
  pinball: string | null;
  absoluteError: number | null;
  naiveError: number | null;
  pit: number | null;
  acknowledged: number;
  recomputed: number;
  modelId: string;
}

/** Sends the scores under a filter as CSV (RFC 4180), oldest first, after the cautions; read in short steps. */
export async function sendScores({ deps, site, query, now, res }: SiteContext<typeof contract>): Promise<undefined> {
  const { read } = deps.database;
  const zone = makeZone(site.timeZone);
  const names = new Map((await readAreas(read, site.id)).map(({ id, name }) => [id, name]));
  const head = [
    ...cautions,
    `Scores of ${site.name}, written ${localTime(zone, now)}. Times are local (${site.timeZone}).`,
  ].map((line) => `# ${line}\r\n`);
  res.status(200);
  res.type('text/csv; charset=utf-8');
  res.setHeader('cache-control', 'no-store');
  res.setHeader('content-disposition', 'attachment; filename="track-record.csv"');
  await pipeline(
    Readable.from(linesOf(read, site.id, query, now, [...head, line(columns)].join(''), zone, names)),
    res,
  );
  return undefined;
}

async function* linesOf(
  read: EntityManager,
  siteId: string,
  query: TrackFilter,
  now: number,
  head: string,
  zone: Zone,
  names: ReadonlyMap<string, string>,
): AsyncGenerator<string> {
  yield head;
  const lead = nearestLead(await readLeads(read, siteId, query.measure), query);
  const { where, values } = filterCondition(siteId, { ...query, lead });
  let after = { at: now - query.weeks * 7 * 86_400, id: 0 };
  for (;;) {
    const rows = await read.query<Row[]>(
      `SELECT * FROM forecast_score WHERE ${where} AND (fromAt, id) > (?, ?) ORDER BY fromAt, id LIMIT ?`,
      [...values, after.at, after.id, rowsPerRead],
    );
    const last = rows.at(-1);
    if (!last) return;
    after = { at: last.fromAt, id: last.id };
    yield rows.map((row) => line(fieldsOf(row, zone, names))).join('');
  }
}

function fieldsOf(row: Row, zone: Zone, names: ReadonlyMap<string, string>): (string | number | null)[] {
  const interval = row.intervals === null ? null : (JSON.parse(row.intervals) as [number, number, number | null][])[2];
  const pinball = row.pinball === null ? null : meanPinball(JSON.parse(row.pinball) as number[]);
  const yes = (value: number | null): string | null => (value === null ? null : value === 1 ? 'yes' : 'no');
  return [
    row.outlookId ?? row.weekOutlookId,
    row.measure,
    row.areaId === '' ? 'Whole department' : (names.get(row.areaId) ?? row.areaId),
    leadInWords(row.measure, row.leadHours),
    row.shift,
    localTime(zone, row.fromAt),
    localTime(zone, row.toAt),
    row.observed,
    row.median,
    interval?.[0] ?? null,
    interval?.[1] ?? null,
    interval?.[2] ?? null,
    row.chance,
    yes(row.short),
    row.logScore,
    pinball,
    row.absoluteError,
    row.naiveError,
    row.pit,
    yes(row.acknowledged),
    yes(row.recomputed),
    row.modelId,
  ];
}

function localTime(zone: Zone, at: number): string {
  const { hour, minute } = localParts(zone.toLocal(at));
  return `${localDate(zone.toLocal(at))} ${String(hour).padStart(2, '0')}:${String(minute).padStart(2, '0')}`;
}

/** One record; what a spreadsheet would compute is made text. */
function line(fields: readonly (string | number | null)[]): string {
  return `${Papa.unparse([fields as unknown[]], { escapeFormulae: true, newline: '\r\n' })}\r\n`;
}
