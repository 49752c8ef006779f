import type { EntityManager } from 'typeorm';
import type { ScenarioLine, Scenario as ScenarioReply, ScenarioResult } from '../../../shared/api/scenarios.ts';
import { Job } from '../../entities/Job.ts';
import { Scenario } from '../../entities/Scenario.ts';
import { notFound } from '../../errors.ts';

/** Columns that lists leave out. */
export const wholeScenario = ['scenario.input', 'scenario.result'];

/** A plan of a site with its inputs and result. @throws 404 where the site has none, or it was withdrawn. */
export async function readScenario(read: EntityManager, siteId: string, id: string): Promise<Scenario> {
  const found = await read
    .createQueryBuilder(Scenario, 'scenario')
    .addSelect(wholeScenario)
    .where({ siteId, id })
    .getOne();
  if (!found || found.state === 'withdrawn') throw notFound('This plan');
  return found;
}

/** A plan as lists show it. */
export async function presentLine(read: EntityManager, row: Scenario, personId: string): Promise<ScenarioLine> {
  const job = row.state === 'confirming' && row.jobId ? await read.findOneBy(Job, { id: row.jobId }) : null;
  const { id, name, state, changes, savedAt, savedBy, basisDigest, basisIssuedAt } = row;
  const { confirmedAt, adoptedAt, adoptedBy, adoptedAs, error } = row;
  return {
    id,
    name,
    state,
    changes,
    savedAt,
    savedBy,
    own: row.savedByPersonId === personId,
    basisDigest,
    basisIssuedAt,
    confirmedAt,
    adoptedAt,
    adoptedBy,
    adoptedAs,
    progress: job ? { share: job.progress, text: job.progressText } : null,
    error,
  };
}

/** A plan whole, exactly as it was confirmed. */
export async function presentScenario(read: EntityManager, row: Scenario, personId: string): Promise<ScenarioReply> {
  const { seed, modelId, engineVersion, softwareVersion, result, resultDigest } = row;
  return {
    ...(await presentLine(read, row, personId)),
    seed,
    modelId,
    engineVersion,
    softwareVersion,
    result: result === null ? null : (JSON.parse(result) as ScenarioResult),
    resultDigest,
  };
}
