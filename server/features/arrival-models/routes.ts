import type { Express } from 'express';
import { In } from 'typeorm';
import { approveModel, fitModel, getModel, listModels, retireModel } from '../../../shared/api/arrival-models.ts';
import { withArticle } from '../../../shared/domain/identifier-kind.ts';
import { screenNote } from '../../../shared/domain/screen-note.ts';
import { engineVersion } from '../../../shared/forecasting/engine-version.ts';
import { newId } from '../../database/new-id.ts';
import type { Dependencies } from '../../dependencies.ts';
import { ArrivalModelRow } from '../../entities/ArrivalModelRow.ts';
import { VisitLog } from '../../entities/VisitLog.ts';
import { badInput, conflict, HttpError, notFound } from '../../errors.ts';
import { recordAudit } from '../../http/audit.ts';
import { addSiteRoute, type RouteTable } from '../../http/route.ts';
import { fitJobKind } from './fit-model.job.ts';
import { presentModel, presentModelDetail } from './present.ts';
import { sinceFit } from './since-fit.ts';

const unchanged = { withdrawnLogs: [], gapsDeclared: 0 };

/** Arrival models: fit in the background, read, approve (never by the person who fitted), retire. */
export function addArrivalModelRoutes(
  app: Express,
  table: RouteTable,
  deps: Dependencies,
  onApproved: (siteId: string) => Promise<void>,
): void {
  const { database, jobs } = deps;

  async function findModel(siteId: string, modelId: string): Promise<ArrivalModelRow> {
    const row = await database.read.findOneBy(ArrivalModelRow, { id: modelId, siteId });
    if (!row) throw notFound('This model');
    return row;
  }

  const changedSince = async (row: ArrivalModelRow) =>
    (await sinceFit(database.read, row.siteId, [row])).get(row.id) ?? unchanged;

  function checkReason(reason: string): void {
    const kind = screenNote(reason);
    if (kind !== null) {
      throw badInput('The reason was refused.', [
        {
          at: 'reason',
          message: `It seems to hold ${withArticle(kind)}. Say it without anything that identifies a person.`,
        },
      ]);
    }
  }

  addSiteRoute(app, table, deps, listModels, async ({ site, caller }) => {
    const all = await database.read.find(ArrivalModelRow, {
      where: { siteId: site.id },
      order: { createdAt: 'DESC' },
      take: 1000,
    });
    // A model whose level was moved on is listed once, as it is now.
    const movedOn = new Set(all.map((row) => row.refreshedFromId));
    const rows = all.filter((row) => !movedOn.has(row.id));
    const readyLogs = await database.read.countBy(VisitLog, { siteId: site.id, status: 'ready' });
    const changed = await sinceFit(database.read, site.id, rows);
    return {
      models: rows.map((row) => presentModel(row, caller, changed.get(row.id) ?? unchanged)),
      readyLogs,
    };
  });

  addSiteRoute(app, table, deps, getModel, async ({ site, caller, params }) => {
    const row = await findModel(site.id, params.modelId);
    return presentModelDetail(database.read, row, caller, await changedSince(row));
  });

  addSiteRoute(app, table, deps, fitModel, async (context) => {
    const { site, caller, now, body } = context;
    const { logIds } = body;
    if (!(await database.read.existsBy(VisitLog, { siteId: site.id, status: 'ready' }))) {
      throw conflict('There is no accepted visit log to fit on.', 'A data steward loads one first.');
    }
    if (logIds) {
      const ready = await database.read.countBy(VisitLog, { siteId: site.id, status: 'ready', id: In(logIds) });
      if (ready !== new Set(logIds).size) {
        throw badInput('A chosen log is not there.', [
          { at: 'logIds', message: 'Choose among the loaded logs of this site; one may have been withdrawn.' },
        ]);
      }
    }
    const modelId = newId();
    const jobId = await database.write(async (manager) => {
      if (await manager.existsBy(ArrivalModelRow, { siteId: site.id, status: 'fitting' })) {
        throw conflict('A model of this site is being fitted already.', 'Wait for it, or cancel it.');
      }
      const queued = await jobs.enqueue(manager, {
        kind: fitJobKind,
        title: 'Fit an arrival model',
        siteId: site.id,
        payload: { modelId, ...(logIds ? { logIds } : {}) },
        createdBy: caller.person.name,
        maxAttempts: 2,
      });
      await manager.insert(ArrivalModelRow, {
        id: modelId,
        siteId: site.id,
        status: 'fitting',
        createdAt: now,
        fittedByPersonId: caller.person.id,
        fittedBy: caller.person.name,
        engineVersion,
        jobId: queued,
      });
      await recordAudit(manager, context, 'arrival-model.fit-asked', modelId, logIds ? { logIds } : {});
      return queued;
    });
    return { modelId, jobId };
  });

  addSiteRoute(app, table, deps, approveModel, async (context) => {
    const { site, caller, params, body, now } = context;
    const row = await findModel(site.id, params.modelId);
    checkReason(body.reason);
    if (row.fittedByPersonId === caller.person.id) {
      throw new HttpError(403, 'Not allowed', 'You fitted this model; somebody else has to approve it.', {
        kept: 'The model stays a candidate.',
        next: 'Ask another operations manager to approve it.',
      });
    }
    await database.write(async (manager) => {
      const current = await manager.findOneByOrFail(ArrivalModelRow, { id: row.id });
      if (current.status !== 'candidate') {
        throw conflict(`Only a candidate can be approved; this model is ${current.status}.`, 'Reload the page.');
      }
      await manager.update(
        ArrivalModelRow,
        { siteId: site.id, status: 'in use' },
        { status: 'retired', retiredAt: now },
      );
      await manager.update(
        ArrivalModelRow,
        { id: row.id },
        { status: 'in use', approvedAt: now, approvedBy: caller.person.name, reason: body.reason },
      );
      await recordAudit(manager, context, 'arrival-model.approved', row.id, {}, body.reason);
    });
    await onApproved(site.id);
    const judged = await findModel(site.id, row.id);
    return presentModel(judged, caller, await changedSince(judged));
  });

  addSiteRoute(app, table, deps, retireModel, async (context) => {
    const { site, caller, params, body, now } = context;
    const row = await findModel(site.id, params.modelId);
    checkReason(body.reason);
    await database.write(async (manager) => {
      const retired = await manager.update(
        ArrivalModelRow,
        { id: row.id, status: In(['candidate', 'in use']) },
        { status: 'retired', retiredAt: now, reason: body.reason },
      );
      if (retired.affected !== 1)
        throw conflict(`This model is ${row.status}; it cannot be retired.`, 'Reload the page.');
      await recordAudit(manager, context, 'arrival-model.retired', row.id, {}, body.reason);
    });
    const judged = await findModel(site.id, row.id);
    return presentModel(judged, caller, await changedSince(judged));
  });
}
