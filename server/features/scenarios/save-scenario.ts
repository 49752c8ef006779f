import type { z } from 'zod';
import type { saveScenarioBody } from '../../../shared/api/scenarios.ts';
import { withArticle } from '../../../shared/domain/identifier-kind.ts';
import { checkPlanChanges } from '../../../shared/domain/plan-change.ts';
import { screenNote } from '../../../shared/domain/screen-note.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { engineVersion } from '../../../shared/forecasting/engine-version.ts';
import { newId } from '../../database/new-id.ts';
import type { Dependencies } from '../../dependencies.ts';
import { Scenario } from '../../entities/Scenario.ts';
import { badInput, conflict, type Fault } from '../../errors.ts';
import { recordAudit } from '../../http/audit.ts';
import type { SiteContext } from '../../http/route.ts';
import { softwareVersion } from '../../software-version.ts';
import { planFrame, type WhatIfDesk } from './what-if-desk.ts';

/** Saves a plan with the inputs of now. Refused whole, with the field of every fault, where a change does not fit. */
export async function saveScenario(
  deps: Dependencies,
  desk: WhatIfDesk,
  context: Pick<SiteContext<unknown>, 'site' | 'caller' | 'now' | 'requestId' | 'address'>,
  { name, changes }: z.output<typeof saveScenarioBody>,
): Promise<string> {
  const { site, caller, now } = context;
  const open = await desk.open(site, now);
  if (!('basis' in open)) throw conflict(`There is nothing to try a plan against. ${open.reason}`, open.next);
  const { basis } = open;
  const faults: Fault[] = checkPlanChanges(changes, planFrame(basis), makeZone(site.timeZone));
  const kind = screenNote(name);
  if (kind !== null) {
    faults.push({
      at: 'name',
      message: `The name seems to hold ${withArticle(kind)}. Say it without anything that identifies a person.`,
    });
  }
  if (faults.length > 0) {
    throw badInput(`The plan has ${faults.length === 1 ? '1 fault' : `${String(faults.length)} faults`}.`, faults);
  }
  const id = newId();
  await deps.database.write(async (manager) => {
    await manager.insert(Scenario, {
      id,
      siteId: site.id,
      name,
      state: 'saved',
      changes,
      savedAt: now,
      savedBy: caller.person.name,
      savedByPersonId: caller.person.id,
      modelId: basis.modelId,
      planVersion: basis.planVersion,
      seed: basis.input.seed,
      replications: basis.input.replications,
      engineVersion,
      softwareVersion,
      basisDigest: basis.digest,
      basisIssuedAt: basis.input.issuedAt,
      input: JSON.stringify(basis.input),
      jobId: null,
      error: null,
      confirmedAt: null,
      result: null,
      resultDigest: null,
      adoptedAt: null,
      adoptedBy: null,
      adoptedAs: null,
    });
    await recordAudit(manager, context, 'scenario.saved', id, { changes: changes.length });
  });
  return id;
}
