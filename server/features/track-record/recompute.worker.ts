import { createHash } from 'node:crypto';
import SqliteDatabase from 'better-sqlite3';
import { makeZone, type Zone } from '../../../shared/domain/zoned-time.ts';
import { countHourly } from '../../../shared/forecasting/count-hourly.ts';
import { fitArrivals } from '../../../shared/forecasting/fit-arrivals.ts';
import { fitStays } from '../../../shared/forecasting/fit-stays.ts';
import { outlookFromParts, prepareOutlook, simulateOutlookPart } from '../../../shared/forecasting/issue-outlook.ts';
import { knownAt } from '../../../shared/forecasting/known-visits.ts';
import { outlookLaws } from '../../../shared/forecasting/outlook-laws.ts';
import type { OutlookInput } from '../../../shared/forecasting/outlook-types.ts';
import { presentByHour, type PresentByHour } from '../../../shared/forecasting/present-by-hour.ts';
import { refreshLevel } from '../../../shared/forecasting/refresh-level.ts';
import { weekLaws } from '../../../shared/forecasting/week-laws.ts';
import { prepareWeek, simulateWeekPart, weekFromParts } from '../../../shared/forecasting/week-outlook.ts';
import type { WeekOutlookInput } from '../../../shared/forecasting/week-outlook-types.ts';
import type { ExposureGap, VisitTable } from '../../../shared/forecasting/visit-table.ts';
import { coveredSpans, gapsBetween } from '../../database/covered-spans.ts';
import type { ModelParameters } from '../../database/read-model.ts';
import { readSiteVisits } from '../../database/read-visits.ts';
import type { RecomputedModel, RecomputedWeek, RecomputeTask } from './recompute-request.ts';

const day = 86_400;

/** Fits, or issues, with the code of the product and nothing but what was known at the time; a thread of its own. */
export default function work(task: RecomputeTask): RecomputedModel | RecomputedWeek {
  return task.kind === 'fit' ? fitAsOf(task) : issueWeek(task);
}

/** Hours of [from, to) that no log covers, and declared outages. */
function gapsOf(
  task: RecomputeTask,
  lineage: Parameters<typeof coveredSpans>[0],
  areaIds: readonly string[],
  from: number,
  to: number,
): { from: number; to: number; gaps: ExposureGap[] } {
  const covered = coveredSpans(lineage, task.now, task.stayCapHours * 3600)
    .map((span) => ({ from: Math.max(span.from, from), to: Math.min(span.to, to) }))
    .filter((span) => span.to > span.from);
  const [first, last] = [covered.at(0)?.from ?? from, covered.at(-1)?.to ?? to];
  const declared = task.gaps
    .filter((gap) => gap.to > first && gap.from < last)
    .flatMap((gap) => {
      const area = gap.areaId === null ? null : areaIds.indexOf(gap.areaId);
      return area === -1 ? [] : [{ area, from: Math.max(gap.from, first), to: Math.min(gap.to, last) }];
    });
  return { from: first, to: last, gaps: [...gapsBetween(covered).map((gap) => ({ area: null, ...gap })), ...declared] };
}

function fitAsOf(task: RecomputeTask & { kind: 'fit' }): RecomputedModel {
  const { table, areaIds, lineage, facts } = readSiteVisits(task.databaseFile, task.siteId);
  if (!facts) throw new RangeError('no accepted visit log holds a visit that counts');
  const zone = makeZone(task.timeZone);
  const { from, to, gaps } = gapsOf(task, lineage, areaIds, 0, task.until);
  const visits = knownAt(table, to);
  const arrival = fitArrivals({
    counts: countHourly(visits, areaIds.length, zone, from, to, gaps),
    calendar: task.calendar.filter(({ date }) => date <= new Date((to + 14 * 3600) * 1000).toISOString().slice(0, 10)),
  });
  const stay = fitStays({
    visits,
    areas: areaIds.length,
    zone,
    window: { from, to },
    facts: { ...facts, takenAt: to, missingDeparture: 'still present' },
    capHours: task.stayCapHours,
    gaps,
    calendar: task.calendar,
  });
  const parameters: ModelParameters = { areaIds, arrival, stay, calendar: task.calendar };
  return { parameters: JSON.stringify(parameters), trainedFrom: from, trainedTo: to, visits: visits.length };
}

function issueWeek(task: RecomputeTask & { kind: 'week' }): RecomputedWeek {
  const before = readModel(task.databaseFile, task.modelId);
  const { table, areaIds, lineage } = readSiteVisits(
    task.databaseFile,
    task.siteId,
    Math.min(before.trainedTo, task.until) - task.stayCapHours * 3600 - day,
  );
  // The model numbers areas in its own order.
  const place = areaIds.map((id) => before.parameters.areaIds.indexOf(id));
  if (place.some((index) => index < 0)) throw new RangeError('the care areas have changed since');
  for (let row = 0; row < table.length; row += 1) table.area[row] = place[table.area[row]];
  const zone = makeZone(task.timeZone);
  const { model, trainedTo } = moveOn(task, before, table, lineage, zone);
  const present = presentByHour(table, areaIds.length, task.stayCapHours);
  return {
    model: {
      parameters: JSON.stringify(model),
      trainedFrom: before.trainedFrom,
      trainedTo,
      visits: before.visits,
    },
    outlooks: task.inputs.map((input) => issueOne(model, withCounts(input, table, present, zone))),
    // Fewer than eight weeks give no week ahead.
    weekOutlooks: model.arrival.coarse
      ? []
      : task.weekInputs.map((input) => issueOneWeek(model, withCounts(input, table, present, zone))),
  };
}

function readModel(file: string, modelId: string) {
  const db = new SqliteDatabase(file, { readonly: true, fileMustExist: true, timeout: 5000 });
  try {
    const row = db
      .prepare('SELECT parameters, trainedFrom, trainedTo, visits FROM arrival_model WHERE id = ?')
      .get(modelId) as { parameters: string; trainedFrom: number; trainedTo: number; visits: number };
    return { ...row, parameters: JSON.parse(row.parameters) as ModelParameters };
  } finally {
    db.close();
  }
}

/** The model with its level moved on by the visits that had arrived by then. */
function moveOn(
  task: RecomputeTask & { kind: 'week' },
  before: ReturnType<typeof readModel>,
  table: VisitTable,
  lineage: Parameters<typeof coveredSpans>[0],
  zone: Zone,
): { model: ModelParameters; trainedTo: number } {
  const from = before.trainedTo - day;
  const span = gapsOf(task, lineage, before.parameters.areaIds, from, task.until);
  if (!(span.to > before.trainedTo + 3600)) return { model: before.parameters, trainedTo: before.trainedTo };
  const counts = countHourly(table, before.parameters.areaIds.length, zone, span.from, span.to, span.gaps);
  return {
    model: { ...before.parameters, arrival: refreshLevel(before.parameters.arrival, counts) },
    trainedTo: span.to,
  };
}

/** The counts that a census would have found, and the arrivals since midnight, from the log. */
function withCounts<Input extends OutlookInput>(
  input: Input,
  table: VisitTable,
  present: PresentByHour,
  zone: Zone,
): Input {
  const at = input.issuedAt;
  const local = zone.toLocal(at);
  const midnight = zone.fromLocal(local - (local % day)).at(0) ?? at;
  let count = 0;
  for (let i = 0; i < table.length; i += 1) if (table.arrivalAt[i] >= midnight && table.arrivalAt[i] < at) count += 1;
  const census = present.censusAt(at);
  return {
    ...input,
    areas: input.areas.map((area, a) => ({ ...area, census: census[a] })),
    undecided: null,
    arrivalsSince: at - midnight >= 900 ? { from: midnight, to: at, count } : null,
  };
}

function issueOne(model: ModelParameters, input: OutlookInput): RecomputedWeek['outlooks'][number] {
  const startedAt = performance.now();
  const prepared = prepareOutlook(model, input);
  const parts = [simulateOutlookPart(prepared, 0, input.replications)];
  const outlook = outlookFromParts(prepared, parts);
  return asStored(input, startedAt, outlook, outlookLaws(prepared, parts, outlook, model));
}

function issueOneWeek(model: ModelParameters, input: WeekOutlookInput): RecomputedWeek['weekOutlooks'][number] {
  const startedAt = performance.now();
  const prepared = prepareWeek(model, input);
  const parts = [simulateWeekPart(prepared, 0, input.replications)];
  const outlook = weekFromParts(prepared, parts);
  return {
    ...asStored(input, startedAt, outlook, weekLaws(prepared, parts, outlook)),
    calendar: JSON.stringify(input.calendar),
  };
}

/** The columns that outlooks of both kinds are stored in. */
function asStored(input: OutlookInput | WeekOutlookInput, startedAt: number, outlook: object, laws: object) {
  const result = JSON.stringify(outlook);
  return {
    issuedAt: input.issuedAt,
    seed: input.seed,
    replications: input.replications,
    computeMilliseconds: performance.now() - startedAt,
    input: JSON.stringify(input),
    result,
    laws: JSON.stringify(laws),
    digest: createHash('sha256').update(result).digest('hex'),
  };
}
