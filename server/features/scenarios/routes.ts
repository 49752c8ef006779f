import type { Express } from 'express';
import { Not } from 'typeorm';
import * as api from '../../../shared/api/scenarios.ts';
import type { OutlookInput } from '../../../shared/forecasting/outlook-types.ts';
import { readModelParameters } from '../../database/read-model.ts';
import type { Dependencies } from '../../dependencies.ts';
import { Scenario } from '../../entities/Scenario.ts';
import { conflict, HttpError } from '../../errors.ts';
import { recordAudit } from '../../http/audit.ts';
import { addSiteRoute, type RouteTable } from '../../http/route.ts';
import { adoptScenario } from './adopt-scenario.ts';
import { comparePlan, digestOf } from './compare-plan.ts';
import { confirmJobKind } from './confirm-scenario.job.ts';
import { presentLine, presentScenario, readScenario } from './present.ts';
import { saveScenario } from './save-scenario.ts';
import { whatIfCautions } from './what-if-cautions.ts';
import { WhatIfDesk } from './what-if-desk.ts';

/** Plans against as is: tried in the browser, saved, confirmed by simulation, adopted into the staffed-bed plan. */
export function addScenarioRoutes(
  app: Express,
  table: RouteTable,
  deps: Dependencies,
  replications: number,
  onBedsChanged: (siteId: string) => Promise<unknown>,
): void {
  const { read, write } = deps.database;
  const desk = new WhatIfDesk(deps, replications);

  addSiteRoute(app, table, deps, api.getWhatIf, async ({ site, now, res }) => {
    const open = await desk.open(site, now);
    if (!('basis' in open)) return { now, basis: null, missing: open, cautions: [] };
    // Text made on a thread, sent as it is: checking tens of thousands of numbers again would hold every other request up.
    const text = await open.text;
    const cautions = JSON.stringify(await whatIfCautions(read, site, now));
    res.setHeader('cache-control', 'no-store');
    res.type('application/json').send(`{"now":${String(now)},"missing":null,"cautions":${cautions},"basis":${text}}`);
    return undefined;
  });

  addSiteRoute(app, table, deps, api.listScenarios, async ({ site, caller }) => {
    const rows = await read.find(Scenario, {
      where: { siteId: site.id, state: Not('withdrawn') },
      order: { savedAt: 'DESC', id: 'ASC' },
      take: 200,
    });
    return { scenarios: await Promise.all(rows.map((row) => presentLine(read, row, caller.person.id))) };
  });

  addSiteRoute(app, table, deps, api.saveScenario, async (context) => {
    const id = await saveScenario(deps, desk, context, context.body);
    return presentScenario(read, await readScenario(read, context.site.id, id), context.caller.person.id);
  });

  addSiteRoute(app, table, deps, api.getScenario, async ({ site, params, caller }) =>
    presentScenario(read, await readScenario(read, site.id, params.scenarioId), caller.person.id),
  );

  addSiteRoute(app, table, deps, api.confirmScenario, async (context) => {
    const { site, caller, params } = context;
    await write(async (manager) => {
      const row = await readScenario(manager, site.id, params.scenarioId);
      if (row.state === 'confirming')
        throw conflict('This plan is being confirmed already.', 'Wait for it, or cancel it.');
      if (row.state === 'confirmed') {
        throw conflict('This plan is confirmed already.', 'Its differences stand; save another to try something else.');
      }
      const jobId = await deps.jobs.enqueue(manager, {
        kind: confirmJobKind,
        title: `Confirm the plan “${row.name}”`,
        siteId: site.id,
        payload: { siteId: site.id, scenarioId: row.id },
        createdBy: caller.person.name,
      });
      await manager.update(Scenario, { id: row.id }, { state: 'confirming', jobId, error: null });
      await recordAudit(manager, context, 'scenario.confirmation-started', row.id, { jobId });
    });
    return presentLine(read, await readScenario(read, site.id, params.scenarioId), caller.person.id);
  });

  addSiteRoute(app, table, deps, api.cancelConfirmation, async (context) => {
    const { site, caller, params } = context;
    const row = await readScenario(read, site.id, params.scenarioId);
    const cancelled =
      row.jobId !== null &&
      (await deps.jobs.cancel(row.jobId, (manager) =>
        recordAudit(manager, context, 'scenario.confirmation-cancelled', row.id, { jobId: row.jobId }),
      ));
    if (!cancelled) throw conflict('No confirmation of this plan is under way.', 'Nothing more to do.');
    return presentLine(read, await readScenario(read, site.id, row.id), caller.person.id);
  });

  addSiteRoute(app, table, deps, api.repeatScenario, async ({ site, params }) => {
    const row = await readScenario(read, site.id, params.scenarioId);
    if (row.resultDigest === null) throw conflict('This plan is not confirmed.', 'Confirm it first.');
    const parameters = await readModelParameters(read, row.modelId);
    const input = JSON.parse(row.input) as OutlookInput;
    const repeated = digestOf(await comparePlan(deps.pool, parameters, input, row.changes));
    return { sameDigits: repeated === row.resultDigest, storedDigest: row.resultDigest, repeatedDigest: repeated };
  });

  addSiteRoute(app, table, deps, api.withdrawScenario, async (context) => {
    const { site, caller, params } = context;
    const row = await readScenario(read, site.id, params.scenarioId);
    if (row.savedByPersonId !== caller.person.id) {
      throw new HttpError(
        403,
        'Not allowed',
        `This plan was saved by ${row.savedBy}; only its own author withdraws it.`,
        {
          kept: 'The plan is unchanged.',
          next: 'Ask the author to withdraw it.',
        },
      );
    }
    if (row.state === 'confirming') throw conflict('This plan is being confirmed.', 'Cancel that first.');
    await write(async (manager) => {
      await manager.update(Scenario, { id: row.id }, { state: 'withdrawn' });
      await recordAudit(manager, context, 'scenario.withdrawn', row.id);
    });
    return presentLine(read, Object.assign(row, { state: 'withdrawn' as const }), caller.person.id);
  });

  addSiteRoute(app, table, deps, api.adoptScenario, async (context) => {
    const { site, caller, params, body } = context;
    const adopted = await write((manager) => adoptScenario(manager, context, params.scenarioId, body));
    await onBedsChanged(site.id);
    const row = await readScenario(read, site.id, params.scenarioId);
    return { scenario: await presentLine(read, row, caller.person.id), ...adopted };
  });
}
