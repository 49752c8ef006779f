import type { EntityManager } from 'typeorm';
import { bedsAt, type BedStep } from '../../../shared/domain/bed-schedule.ts';
import { withArticle } from '../../../shared/domain/identifier-kind.ts';
import { bedWindows, changedBeds, dayAndTime } from '../../../shared/domain/plan-change.ts';
import { screenNote } from '../../../shared/domain/screen-note.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import type { OutlookInput } from '../../../shared/forecasting/outlook-types.ts';
import { newId } from '../../database/new-id.ts';
import { readAreas } from '../../database/read-site.ts';
import { readStaffedBedSteps } from '../../database/read-staffed-beds.ts';
import { savePlan } from '../../database/save-plan.ts';
import { BedChange } from '../../entities/BedChange.ts';
import { Scenario } from '../../entities/Scenario.ts';
import { badInput, conflict, type Fault } from '../../errors.ts';
import { recordAudit } from '../../http/audit.ts';
import type { SiteContext } from '../../http/route.ts';
import { readScenario } from './present.ts';
import { weeklyPlan } from './weekly-plan.ts';

/** Staffed beds that differ from what is in force, between two instants. */
interface Run {
  from: number;
  to: number;
  beds: number;
}

const saveAgain = 'Open the plan, save it again on today’s figures, confirm it and adopt that.';

/** What an adoption made. */
export interface Adopted {
  exceptions: number;
  planVersion: number | null;
}

/**
 * Puts a confirmed plan's staffed beds into force, within the caller's transaction: as dated exceptions, or as a new version of
 * the weekly plan. Refused whole, with every stretch named, where it would go below an area's safe minimum or beyond its bed
 * spaces; where the staffed beds have changed since the plan was saved; and for every week where what it was tried against is
 * not the weekly plan.
 */
export async function adoptScenario(
  manager: EntityManager,
  context: Pick<SiteContext<unknown>, 'site' | 'caller' | 'now' | 'requestId' | 'address'>,
  scenarioId: string,
  { reason, as }: { reason: string; as: NonNullable<Scenario['adoptedAs']> },
): Promise<Adopted> {
  const { site, caller, now } = context;
  const zone = makeZone(site.timeZone);
  const row = await readScenario(manager, site.id, scenarioId);
  if (row.adoptedAt !== null) throw conflict('This plan was adopted already.', 'Nothing more to do.');
  if (row.state !== 'confirmed') {
    throw conflict(
      'Only a confirmed plan can be adopted.',
      'Confirm it first: the preview is not the full simulation.',
    );
  }
  const kind = screenNote(reason);
  const faults: Fault[] = [];
  if (kind !== null) {
    const message = `The reason seems to hold ${withArticle(kind)}. Say it without anything that identifies a person.`;
    faults.push({ at: 'reason', message });
  }
  const input = JSON.parse(row.input) as OutlookInput;
  const exceptions: (Run & { areaId: string })[] = [];
  for (const area of await readAreas(manager, site.id)) {
    const stored = input.areas.find(({ areaId }) => areaId === area.id)?.staffedBeds;
    const windows = bedWindows(row.changes, area.id);
    if (!stored || windows.length === 0) continue;
    const first = Math.min(...windows.map((one) => one.from));
    // What has passed of a stretch comes again with the week.
    const from = as === 'every week' ? first : Math.max(now, first);
    const to = Math.max(...windows.map((one) => one.to));
    if (to <= from) continue;
    const inForce = (await readStaffedBedSteps(manager, site.id, zone, [area.id], from, to))?.get(area.id);
    const runs = changedRuns(stored, changedBeds(stored, windows), from, to);
    for (const run of runs) {
      const at = `${area.name}, ${dayAndTime(zone, run.from)}`;
      if (!inForce || changedRuns(stored, inForce, run.from, run.to).length > 0) {
        throw conflict(`The staffed beds of ${area.name} have changed since this plan was saved.`, saveAgain);
      }
      if (run.beds < area.safeMinimum) {
        const message = `${String(run.beds)} is below the safe minimum of ${String(area.safeMinimum)}. It may be tried, but not staffed.`;
        faults.push({ at, message });
      } else if (run.beds > area.spaces) {
        faults.push({ at, message: `${String(run.beds)} is beyond the ${String(area.spaces)} bed spaces that exist.` });
      }
      exceptions.push({ ...run, areaId: area.id });
    }
  }
  if (faults.length === 0 && as === 'every week' && exceptions.length > 0) {
    const weekly = await weeklyPlan(manager, row, input, zone, exceptions);
    if ('areas' in weekly) {
      const plan = { areas: weekly.areas, reason, basedOnVersion: weekly.version };
      const saved = await savePlan(manager, site.id, plan, caller.person.name, now);
      const { version } = saved;
      await manager.update(Scenario, { id: row.id }, { adoptedAt: now, adoptedBy: caller.person.name, adoptedAs: as });
      const origin = { version, scenarioId: row.id };
      await recordAudit(manager, context, 'staffed-beds.plan-saved', saved.id, origin, reason);
      const detail = { as, version, resultDigest: row.resultDigest };
      await recordAudit(manager, context, 'scenario.adopted', row.id, detail, reason);
      return { exceptions: 0, planVersion: version };
    }
    faults.push(...weekly.faults);
  }
  if (faults.length > 0) throw badInput('The plan cannot be adopted.', faults);
  if (exceptions.length === 0) {
    throw badInput('The plan changes no staffed beds from now on: there is nothing to adopt.', [], saveAgain);
  }
  await manager.insert(
    BedChange,
    exceptions.map(({ areaId, from, to, beds }) => ({
      id: newId(),
      siteId: site.id,
      areaId,
      kind: 'dated exception' as const,
      fromAt: from,
      untilAt: to,
      beds,
      blocked: 0,
      reason,
      madeBy: caller.person.name,
      madeAt: now,
    })),
  );
  await manager.update(Scenario, { id: row.id }, { adoptedAt: now, adoptedBy: caller.person.name, adoptedAs: as });
  const detail = { as, exceptions: exceptions.length, resultDigest: row.resultDigest };
  await recordAudit(manager, context, 'scenario.adopted', row.id, detail, reason);
  return { exceptions: exceptions.length, planVersion: null };
}

/** The stretches of [from, to) where `changed` differs from `before`. */
function changedRuns(before: readonly BedStep[], changed: readonly BedStep[], from: number, to: number): Run[] {
  const cuts = [...before, ...changed].map(({ at }) => at).filter((at) => at > from && at < to);
  const ends = [...new Set([from, ...cuts, to])].sort((a, b) => a - b);
  const runs: Run[] = [];
  ends.slice(0, -1).forEach((at, i) => {
    const beds = bedsAt(changed, at);
    if (beds === bedsAt(before, at)) return;
    const last = runs.at(-1);
    if (last?.to === at && last.beds === beds) last.to = ends[i + 1];
    else runs.push({ from: at, to: ends[i + 1], beds });
  });
  return runs;
}
