import { randomInt } from 'node:crypto';
import type { Express } from 'express';
import type { EntityManager } from 'typeorm';
import { compareModel, getModelComparison, type ModelComparisonReply } from '../../../shared/api/arrival-models.ts';
import { instantOfLocal } from '../../../shared/domain/shift-times.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import type { ModelComparison } from '../../../shared/forecasting/compare-models.ts';
import { comparisonSentences } from '../../../shared/forecasting/comparison-sentences.ts';
import { engineVersion } from '../../../shared/forecasting/engine-version.ts';
import { newId } from '../../database/new-id.ts';
import { readApprovedAs } from '../../database/read-approved-as.ts';
import { readModelInUse } from '../../database/read-model.ts';
import type { Dependencies } from '../../dependencies.ts';
import { ArrivalModelRow } from '../../entities/ArrivalModelRow.ts';
import { ModelComparisonRow } from '../../entities/ModelComparisonRow.ts';
import type { Site } from '../../entities/Site.ts';
import { conflict, notFound } from '../../errors.ts';
import { recordAudit } from '../../http/audit.ts';
import { addSiteRoute, type RouteTable } from '../../http/route.ts';
import { compareJobKind, comparePayload } from './compare-models.job.ts';

/** A candidate beside the model in use, tried on past weeks before it is approved. */
export function addComparisonRoutes(app: Express, table: RouteTable, deps: Dependencies): void {
  const { database, jobs } = deps;

  async function findModel(siteId: string, modelId: string): Promise<ArrivalModelRow> {
    const row = await database.read.findOneBy(ArrivalModelRow, { id: modelId, siteId });
    if (!row) throw notFound('This model');
    return row;
  }

  /** The model in use as it was approved: its level has moved on since, and has seen the weeks to be scored. */
  async function readApproved(read: EntityManager, siteId: string): Promise<string | null> {
    const inUse = await readModelInUse(read, siteId);
    return inUse && ((await readApprovedAs(read, siteId))[inUse.id] ?? inUse.id);
  }

  addSiteRoute(app, table, deps, getModelComparison, async ({ site, params }) => {
    const model = await findModel(site.id, params.modelId);
    const { read } = database;
    const inUseId = await readApproved(read, site.id);
    const row = await read.findOne(ModelComparisonRow, {
      where: { candidateId: model.id },
      order: { createdAt: 'DESC' },
    });
    return {
      comparison: row && (await presentComparison(read, site, row, inUseId)),
      mayCompare: model.status === 'candidate' && inUseId !== null && row?.status !== 'running',
    };
  });

  addSiteRoute(app, table, deps, compareModel, async (context) => {
    const { site, caller, params, body, now } = context;
    const model = await findModel(site.id, params.modelId);
    if (model.status !== 'candidate') {
      throw conflict(`Only a candidate is compared; this model is ${model.status}.`, 'Reload the page.');
    }
    const inUseId = await readApproved(database.read, site.id);
    if (inUseId === null) {
      throw conflict('No model is in use to compare with.', 'Its own page says how the candidate was made.');
    }
    const comparisonId = newId();
    const jobId = await database.write(async (manager) => {
      if (await manager.existsBy(ModelComparisonRow, { siteId: site.id, status: 'running' })) {
        throw conflict('A comparison of this site is running already.', 'Wait for it, or cancel it.');
      }
      const queued = await jobs.enqueue(manager, {
        kind: compareJobKind,
        title: 'Try a candidate on past weeks',
        siteId: site.id,
        payload: comparePayload.parse({ comparisonId, weeks: body.weeks }),
        createdBy: caller.person.name,
        maxAttempts: 2,
      });
      await manager.insert(ModelComparisonRow, {
        id: comparisonId,
        siteId: site.id,
        candidateId: model.id,
        inUseId,
        status: 'running',
        createdAt: now,
        askedBy: caller.person.name,
        jobId: queued,
        seed: randomInt(0, 2 ** 30),
        engineVersion,
      });
      await recordAudit(manager, context, 'arrival-model.compare-asked', model.id, { with: inUseId });
      return queued;
    });
    return { comparisonId, jobId };
  });
}

async function presentComparison(
  read: EntityManager,
  site: Site,
  row: ModelComparisonRow,
  inUseId: string | null,
): Promise<ModelComparisonReply> {
  const other = await read.findOneByOrFail(ArrivalModelRow, { id: row.inUseId });
  const zone = makeZone(site.timeZone);
  const result = row.result === null ? null : (JSON.parse(row.result) as ModelComparison);
  return {
    id: row.id,
    inUse: { id: other.id, fittedAt: other.fittedAt, fittedBy: other.fittedBy },
    stillInUse: row.inUseId === inUseId,
    status: row.status,
    createdAt: row.createdAt,
    askedBy: row.askedBy,
    jobId: row.jobId,
    error: row.error,
    result: result && {
      from: instantOfLocal(zone, result.fromLocalHour * 3600),
      to: instantOfLocal(zone, result.toLocalHour * 3600),
      weeks: result.weeks,
      weeksAlike: result.weeksAlike,
      arrivals: result.arrivals,
      need: result.need,
      draws: result.draws,
      replications: result.replications,
      batches: result.batches,
      words: comparisonSentences(result),
    },
  };
}
