import { z } from 'zod';
import { id } from '../../../shared/api/common.ts';
import { engineVersion } from '../../../shared/forecasting/engine-version.ts';
import type { OutlookInput } from '../../../shared/forecasting/outlook-types.ts';
import { readModelParameters } from '../../database/read-model.ts';
import type { Dependencies } from '../../dependencies.ts';
import { Scenario } from '../../entities/Scenario.ts';
import { recordOwnAudit } from '../../http/audit.ts';
import type { JobKind } from '../../jobs/queue.ts';
import { softwareVersion } from '../../software-version.ts';
import { comparePlan, digestOf } from './compare-plan.ts';
import { readScenario } from './present.ts';

export const confirmJobKind = 'scenario.confirm';
const payloadSchema = z.object({ siteId: id, scenarioId: id });

/** Simulates a plan against as is on its stored inputs and stores the differences. */
export function makeConfirmKind(deps: Dependencies): JobKind {
  const { database, clock, pool } = deps;
  return {
    run: async ({ payload, signal, progress }) => {
      const { siteId, scenarioId } = payloadSchema.parse(payload);
      const row = await readScenario(database.read, siteId, scenarioId);
      const parameters = await readModelParameters(database.read, row.modelId);
      progress(0, 'Simulating');
      const result = await comparePlan(pool, parameters, JSON.parse(row.input) as OutlookInput, row.changes, {
        signal,
        onDone: (share) =>
          progress(share, `${String(Math.round(share * row.replications))} of ${String(row.replications)} pairs`),
      });
      const confirmedAt = clock();
      await database.write(async (manager) => {
        const stored = await manager.update(
          Scenario,
          { id: scenarioId, state: 'confirming' },
          {
            state: 'confirmed',
            confirmedAt,
            result,
            resultDigest: digestOf(result),
            engineVersion,
            softwareVersion,
            error: null,
          },
        );
        if (stored.affected !== 1) return;
        await recordOwnAudit(manager, {
          at: confirmedAt,
          actor: 'confirmation',
          siteId,
          event: 'scenario.confirmed',
          subject: scenarioId,
          detail: { replications: row.replications },
        });
      });
    },
    settle: async (manager, job, error) => {
      const { scenarioId } = payloadSchema.parse(JSON.parse(job.payload));
      const cancelled = error === 'Cancelled.';
      await manager.update(
        Scenario,
        { id: scenarioId, state: 'confirming' },
        { state: cancelled ? 'cancelled' : 'failed', error: cancelled ? null : error },
      );
    },
  };
}
