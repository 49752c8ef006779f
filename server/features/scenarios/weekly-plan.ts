import type { EntityManager } from 'typeorm';
import { bedsAt, halfHourOfWeek } from '../../../shared/domain/bed-schedule.ts';
import { dayAndTime } from '../../../shared/domain/plan-change.ts';
import type { Zone } from '../../../shared/domain/zoned-time.ts';
import type { OutlookInput } from '../../../shared/forecasting/outlook-types.ts';
import { readAreas } from '../../database/read-site.ts';
import { readPlan } from '../../database/read-staffed-beds.ts';
import type { Scenario } from '../../entities/Scenario.ts';
import { conflict, type Fault } from '../../errors.ts';

/** The weekly plan with a scenario's beds in the half hours that it changes, or why it cannot be made. */
type Weekly = { version: number; areas: { areaId: string; halfHours: number[] }[] } | { faults: Fault[] };

const half = 1800;

/**
 * Lays the beds of a plan's stretches over the weekly plan in force. What it was tried against must be that plan: where a dated
 * exception or a change of tonight stood in its place, the figures say nothing of other weeks.
 */
export async function weeklyPlan(
  manager: EntityManager,
  row: Pick<Scenario, 'siteId'>,
  input: OutlookInput,
  zone: Zone,
  stretches: readonly { areaId: string; from: number; to: number; beds: number }[],
): Promise<Weekly> {
  const inForce = await readPlan(manager, row.siteId);
  if (!inForce) throw conflict('No staffed-bed plan is in force.', 'Save one first.');
  const names = new Map((await readAreas(manager, row.siteId)).map(({ id, name }) => [id, name]));
  const faults: Fault[] = [];
  const areas = inForce.areas.map(({ areaId, halfHours }) => {
    const own = [...halfHours];
    const set = new Map<number, number>();
    const steps = input.areas.find((area) => area.areaId === areaId)?.staffedBeds;
    for (const { from, to, beds } of stretches.filter((one) => one.areaId === areaId)) {
      // The first may begin now, within a half hour: that one is meant whole.
      for (let at = from - (((zone.toLocal(from) % half) + half) % half); at < to; at += half) {
        const place = halfHourOfWeek(zone.toLocal(at));
        const tried = steps ? bedsAt(steps, Math.max(at, input.issuedAt)) : null;
        const where = `${names.get(areaId) ?? areaId}, ${dayAndTime(zone, at)}`;
        if (tried !== halfHours[place]) {
          const message = `An exception of that date stands in place of the weekly plan (${String(tried)} for ${String(halfHours[place])}): adopt it for these dates, or take the exception back and try again.`;
          faults.push({ at: where, message });
        } else if (set.has(place) && set.get(place) !== beds) {
          faults.push({ at: where, message: 'The plan asks for two figures in this half hour of the week.' });
        }
        set.set(place, beds);
        own[place] = beds;
      }
    }
    return { areaId, halfHours: own };
  });
  return faults.length > 0 ? { faults } : { version: inForce.plan.version, areas };
}
