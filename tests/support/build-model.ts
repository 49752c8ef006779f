import type { ModelParameters } from '../../server/database/read-model.ts';
import type { Database } from '../../server/database/database.ts';
import { newId } from '../../server/database/new-id.ts';
import { ArrivalModelRow } from '../../server/entities/ArrivalModelRow.ts';
import { OutlookRow } from '../../server/entities/OutlookRow.ts';
import type { Site } from '../../server/entities/Site.ts';
import { engineVersion } from '../../shared/forecasting/engine-version.ts';
import { buildPerson, type BuiltSite } from './build-site.ts';
import { buildVisitLog, inventVisits } from './build-visit-log.ts';
import type { TestServer } from './test-server.ts';

const day = 86_400;

/** The row of a model with the columns that lists leave out. */
export async function readWholeModel(database: Database, id: string): Promise<ArrivalModelRow> {
  const whole = await database.read
    .createQueryBuilder(ArrivalModelRow, 'model')
    .addSelect(['model.parameters', 'model.detail'])
    .where('model.id = :id', { id })
    .getOneOrFail();
  return whole;
}

/**
 * Invents visits of some weeks up to the test's now, loads them and fits a candidate through the product's own job.
 * Cost: some seconds.
 */
export async function fitModel(server: TestServer, built: BuiltSite, weeks: number): Promise<ArrivalModelRow> {
  const { database } = server.deps;
  const now = server.time.now;
  const today = now - (now % day);
  const from = today - weeks * 7 * day - 3600;
  const log = { periodFrom: from, periodTo: today + day - 3600, takenAt: now };
  await buildVisitLog(database, built, inventVisits(built, from, now), log);
  const role = [{ role: 'steward' as const, siteId: built.site.id }];
  const steward = await server.signedInAs((await buildPerson(database, role, 'Sam Steward')).id);
  const asked = await steward.send('post', `/api/sites/${built.site.id}/arrival-models`, {});
  if (asked.status !== 202) throw new Error(asked.text);
  await server.workJobs();
  return readWholeModel(database, (asked.body as { modelId: string }).modelId);
}

/** Puts a copy of a fitted model into use at another built site: a fit takes seconds, a copy nothing. */
export async function giveModel(
  database: Database,
  fitted: ArrivalModelRow,
  built: BuiltSite,
  more: Partial<ArrivalModelRow> = {},
): Promise<ArrivalModelRow> {
  const parameters = JSON.parse(fitted.parameters ?? '') as ModelParameters;
  parameters.areaIds = built.areas.slice(0, parameters.areaIds.length).map(({ id }) => id);
  return database.write((manager) =>
    manager.save(
      manager.create(ArrivalModelRow, {
        ...fitted,
        id: newId(),
        siteId: built.site.id,
        engineVersion,
        status: 'in use',
        approvedBy: 'Test',
        approvedAt: fitted.fittedAt,
        parameters: JSON.stringify(parameters),
        ...more,
      }),
    ),
  );
}

/** An issued outlook as a row alone: when it was issued, and nothing that could be read of it. */
export async function giveOutlook(database: Database, site: Site, issuedAt: number): Promise<void> {
  await database.write(async (manager) => {
    const model = { siteId: site.id, createdAt: 1, fittedByPersonId: 'x', fittedBy: 'Test', engineVersion };
    const { id: modelId } = await manager.save(
      manager.create(ArrivalModelRow, { ...model, id: newId(), status: 'retired' }),
    );
    await manager.insert(OutlookRow, {
      id: newId(),
      siteId: site.id,
      issuedAt,
      trigger: 'timetable',
      modelId,
      seed: 1,
      replications: 1,
      engineVersion,
      softwareVersion: '0',
      computeMilliseconds: 0,
      input: '{}',
      result: '{}',
      digest: '',
    });
  });
}
