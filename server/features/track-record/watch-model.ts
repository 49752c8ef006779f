import { watchDrift, type DriftReport, type WatchedScore } from '../../../shared/forecasting/drift-watch.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { mondayOfWeek } from '../../database/read-drift.ts';
import { readModelInUse } from '../../database/read-model.ts';
import type { Dependencies } from '../../dependencies.ts';
import { ArrivalModelRow } from '../../entities/ArrivalModelRow.ts';
import { Site } from '../../entities/Site.ts';
import { recordOwnAudit } from '../../http/audit.ts';
import { readApprovedAs } from '../../database/read-approved-as.ts';

/** The lead at which need is watched, hours. */
const watchedLead = 12;

/**
 * Looks at what the model in use has scored since it was approved, and stores on its row what is found. Only whole weeks count,
 * so that a verdict does not change from day to day.
 */
export async function watchModelInUse(deps: Dependencies, siteId: string): Promise<DriftReport | null> {
  const { database, clock } = deps;
  const model = await readModelInUse(database.read, siteId);
  if (!model) return null;
  const approvedAs = await readApprovedAs(database.read, siteId);
  const report = await readDrift(deps, siteId, approvedAs[model.id] ?? model.id);
  const foundWeek = report.findings.at(0)?.week;
  const zone = makeZone((await database.read.findOneByOrFail(Site, { id: siteId })).timeZone);
  const found = foundWeek === undefined ? null : (zone.fromLocal(mondayOfWeek(foundWeek + 1)).at(0) ?? null);
  if (model.driftFoundAt === found && model.drift === JSON.stringify(report)) return report;
  await database.write(async (manager) => {
    await manager.update(
      ArrivalModelRow,
      { id: model.id },
      { driftFoundAt: found, drift: report.weeks > 0 ? JSON.stringify(report) : null },
    );
    if ((model.driftFoundAt === null) === (found === null)) return;
    await recordOwnAudit(manager, {
      at: clock(),
      actor: 'the track record',
      siteId,
      event: found === null ? 'arrival-model.drift-ended' : 'arrival-model.drift-found',
      subject: model.id,
      detail: { findings: report.findings.map(({ series, kind }) => `${series}: ${kind}`) },
    });
  });
  return report;
}

/** What the watch finds in all scores of one approved model. */
export async function readDrift(deps: Dependencies, siteId: string, modelId: string): Promise<DriftReport> {
  const { read } = deps.database;
  const site = await read.findOneByOrFail(Site, { id: siteId });
  const now = makeZone(site.timeZone).toLocal(deps.clock());
  const thisWeek = Math.floor((Math.floor(now / 86_400) + 3) / 7);
  const scores = (measure: 'arrivals' | 'need', lead: number) =>
    read.query<(WatchedScore & { shift: string; day: number })[]>(
      `SELECT week, pit, observed, median, shift, fromAt / 86400 AS day FROM forecast_score
       WHERE siteId = ? AND measure = ? AND leadHours = ? AND areaId = '' AND modelId = ? AND week < ? AND pit IS NOT NULL
       ORDER BY fromAt, id`,
      [siteId, measure, lead, modelId, thisWeek],
    );
  const need = await scores('need', watchedLead);
  // Hours that follow each other say nearly the same: one a shift and day is looked at.
  const last = new Map(need.map((score) => [`${String(score.day)} ${score.shift}`, score]));
  return watchDrift([
    { name: 'arrivals', scores: await scores('arrivals', 0) },
    { name: 'need', scores: [...last.values()] },
  ]);
}
