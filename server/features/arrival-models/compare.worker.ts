import SqliteDatabase from 'better-sqlite3';
import { instantOfLocal } from '../../../shared/domain/shift-times.ts';
import { makeZone, type Zone } from '../../../shared/domain/zoned-time.ts';
import { compareModels } from '../../../shared/forecasting/compare-models.ts';
import type { ComparedModel } from '../../../shared/forecasting/known-models.ts';
import type { ExposureGap, VisitTable } from '../../../shared/forecasting/visit-table.ts';
import { coveredSpans, gapsBetween } from '../../database/covered-spans.ts';
import type { ModelParameters } from '../../database/read-model.ts';
import { readSiteVisits, type SiteVisits } from '../../database/read-visits.ts';
import type { CompareReply, CompareRequest, ComparedRow } from './compare-request.ts';

/** Backtests a candidate beside the model in use on a thread of its own. A refusal of the engine is an answer, not a fault. */
export default function compare(request: CompareRequest): CompareReply {
  try {
    const zone = makeZone(request.timeZone);
    const all = readSiteVisits(request.databaseFile, request.siteId);
    const sameLogs = [...request.candidate.logIds].sort().join() === [...request.inUse.logIds].sort().join();
    const result = compareModels({
      zone,
      calendar: request.calendar,
      capHours: request.stayCapHours,
      weeks: request.weeks,
      candidate: readSide(request, request.candidate, all, zone),
      inUse: readSide(request, request.inUse, all, zone),
      sameLogs,
      seed: request.seed,
      onProgress: (share) => {
        request.progress.postMessage({ share });
      },
    });
    return { refused: null, result };
  } catch (error) {
    if (error instanceof RangeError) return { refused: `The two could not be compared: ${error.message}.` };
    throw error;
  } finally {
    request.progress.close();
  }
}

function readSide(request: CompareRequest, row: ComparedRow, all: SiteVisits, zone: Zone): ComparedModel {
  const { areaIds, arrival, stay } = readParameters(request.databaseFile, row.modelId);
  if (areaIds.length !== all.areaIds.length || areaIds.some((id) => !all.areaIds.includes(id))) {
    throw new RangeError('the care areas have changed since one of the models was fitted');
  }
  const own = readSiteVisits(request.databaseFile, request.siteId, -Infinity, row.logIds);
  if (!own.facts) throw new RangeError('a log that one of the models was fitted on has been withdrawn');
  const whole = covered(request, all, areaIds, request.now);
  return {
    arrival,
    stay,
    areas: areaIds.length,
    visits: inOrder(all, areaIds),
    ...whole,
    // The last day is cut off: part of one would be scored as a whole one.
    toUtc: instantOfLocal(zone, Math.floor(zone.toLocal(whole.toUtc) / 86_400) * 86_400),
    own: {
      visits: inOrder(own, areaIds),
      ...covered(request, own, areaIds, Math.min(request.now, row.trainedTo)),
      facts: own.facts,
    },
  };
}

function readParameters(file: string, modelId: string): ModelParameters {
  const db = new SqliteDatabase(file, { readonly: true, fileMustExist: true, timeout: 5000 });
  try {
    const row = db.prepare('SELECT parameters FROM arrival_model WHERE id = ?').get(modelId) as { parameters: string };
    return JSON.parse(row.parameters) as ModelParameters;
  } finally {
    db.close();
  }
}

/** Visits numbered in the model's own order of areas. */
function inOrder({ table, areaIds }: SiteVisits, order: readonly string[]): VisitTable {
  const place = areaIds.map((id) => order.indexOf(id));
  return { ...table, area: table.area.map((area) => place[area]) };
}

function covered(
  { gaps, stayCapHours }: CompareRequest,
  { lineage }: SiteVisits,
  areaIds: readonly string[],
  until: number,
): { fromUtc: number; toUtc: number; gaps: ExposureGap[] } {
  const spans = coveredSpans(lineage, until, stayCapHours * 3600);
  if (spans.length === 0) throw new RangeError('the accepted logs cover no time that can be used');
  const [fromUtc, toUtc] = [spans[0].from, spans[spans.length - 1].to];
  const declared = gaps
    .filter((gap) => gap.to > fromUtc && gap.from < toUtc)
    .flatMap((gap) => {
      const area = gap.areaId === null ? null : areaIds.indexOf(gap.areaId);
      return area === -1 ? [] : [{ area, from: Math.max(gap.from, fromUtc), to: Math.min(gap.to, toUtc) }];
    });
  return { fromUtc, toUtc, gaps: [...gapsBetween(spans).map((gap) => ({ area: null, ...gap })), ...declared] };
}
