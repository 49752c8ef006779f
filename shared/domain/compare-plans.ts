import { halfHourName } from './clock-text.ts';

/** Neighbouring half hours of week of one area that changed in the same way. */
export interface PlanChange {
  areaId: string;
  /** Half hours of week, the second excluded. */
  from: number;
  to: number;
  /** Null: the area was not in that plan, or had a hole there. */
  before: number | null;
  after: number | null;
}

type Planned = readonly { areaId: string; halfHours: readonly (number | null)[] }[];

/** What differs between two plans, area by area in the order of the later one, then by time. Cost: one look at every half hour. */
export function comparePlans(before: Planned, after: Planned): PlanChange[] {
  const ids = [...after, ...before.filter(({ areaId }) => after.every((area) => area.areaId !== areaId))].map(
    ({ areaId }) => areaId,
  );
  const changes: PlanChange[] = [];
  for (const areaId of ids) {
    const old = before.find((area) => area.areaId === areaId)?.halfHours ?? [];
    const now = after.find((area) => area.areaId === areaId)?.halfHours ?? [];
    for (let halfHour = 0; halfHour < Math.max(old.length, now.length); halfHour += 1) {
      const was = old.at(halfHour) ?? null;
      const is = now.at(halfHour) ?? null;
      if (was === is) continue;
      const last = changes.at(-1);
      if (last?.areaId === areaId && last.to === halfHour && last.before === was && last.after === is) last.to += 1;
      else changes.push({ areaId, from: halfHour, to: halfHour + 1, before: was, after: is });
    }
  }
  return changes;
}

/** Bed-hours a week that the changes add; negative: they take away. Holes are left out. */
export function bedHoursAdded(changes: readonly PlanChange[]): number {
  return changes.reduce(
    (sum, { from, to, before, after }) =>
      before === null || after === null ? sum : sum + ((after - before) * (to - from)) / 2,
    0,
  );
}

/** When a change holds: "Monday 07:00 to 14:00", "Monday 21:00 to Tuesday 07:00". */
export function changeTimes({ from, to }: Pick<PlanChange, 'from' | 'to'>): string {
  const end = halfHourName(to % 336);
  const sameDay = Math.floor(from / 48) === Math.floor(to / 48);
  return `${halfHourName(from)} to ${sameDay ? end.slice(-5) : end}`;
}
