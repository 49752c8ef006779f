import { isoWeekday, type Zone } from './zoned-time.ts';

export const halfHoursOfWeek = 336;

/** Staffed beds from `at` (UTC seconds) until the next step. */
export interface BedStep {
  at: number;
  beds: number;
}

/** Staffed beds that differ from the plan in [fromAt, untilAt). A later one in the list outranks an earlier. */
export interface BedOverride {
  fromAt: number;
  untilAt: number;
  beds: number;
}

/** Half hour of week, 0 (Monday 00:00) .. 335 (Sunday 23:30), of local seconds. */
export function halfHourOfWeek(localSeconds: number): number {
  const secondOfDay = ((localSeconds % 86_400) + 86_400) % 86_400;
  return (isoWeekday(localSeconds) - 1) * 48 + Math.floor(secondOfDay / 1800);
}

/**
 * Staffed beds over [from, to) as steps: the plan by half hour of local week, with overrides laid over it.
 * @param halfHours 336 whole numbers, Monday 00:00 first
 * @returns ascending steps without repeats, the first at `from`
 * Throws a RangeError when the plan is not 336 long or the window is empty. Cost: one step a quarter hour at most.
 */
export function staffedBedSteps(
  zone: Zone,
  halfHours: readonly number[],
  overrides: readonly BedOverride[],
  from: number,
  to: number,
): BedStep[] {
  if (halfHours.length !== halfHoursOfWeek) throw new RangeError('halfHours must have 336 entries');
  if (!(to > from)) throw new RangeError('the window must end after it starts');
  const cuts = new Set<number>([from]);
  for (const change of zone.changesBetween(from, to)) if (change.at < to) cuts.add(change.at);
  for (const { fromAt, untilAt } of overrides) {
    if (fromAt > from && fromAt < to) cuts.add(fromAt);
    if (untilAt > from && untilAt < to) cuts.add(untilAt);
  }
  for (let at = from; at < to;) {
    // The next local half hour; within a quarter hour of it no offset of any zone can change unseen.
    const next = at + 1800 - (((zone.toLocal(at) % 1800) + 1800) % 1800);
    if (next < to) cuts.add(next);
    at = next;
  }
  const steps: BedStep[] = [];
  for (const at of [...cuts].sort((a, b) => a - b)) {
    const inForce = overrides.findLast((override) => override.fromAt <= at && at < override.untilAt);
    const beds = inForce ? inForce.beds : halfHours[halfHourOfWeek(zone.toLocal(at))];
    if (steps.length === 0 || steps[steps.length - 1].beds !== beds) steps.push({ at, beds });
  }
  return steps;
}

/** Staffed beds in force at an instant; the first step's before it. */
export function bedsAt(steps: readonly BedStep[], at: number): number {
  let beds = steps[0].beds;
  for (const step of steps) {
    if (step.at > at) break;
    beds = step.beds;
  }
  return beds;
}
