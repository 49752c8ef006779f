import { changeTimes } from '../../../shared/domain/compare-plans.ts';
import { planFaults, type PlannedArea } from '../../../shared/domain/plan-faults.ts';
import type { Planned } from './plan-draft.ts';

/** Neighbouring half hours of an area with the same fault. */
export interface FaultRun {
  areaId: string;
  /** "Acute, Monday 07:00 to 14:00" */
  at: string;
  message: string;
}

/** Everything that keeps a plan from being saved, neighbours told of once. */
export function groupFaults(areas: readonly PlannedArea[], planned: Planned): FaultRun[] {
  return areas.flatMap((area) => {
    const runs: { from: number; to: number; message: string }[] = [];
    for (const { halfHour, message } of planFaults(area, planned[area.id] ?? [])) {
      const last = runs.at(-1);
      if (last?.to === halfHour && last.message === message) last.to += 1;
      else runs.push({ from: halfHour, to: halfHour + 1, message });
    }
    return runs.map((run) => ({ areaId: area.id, at: `${area.name}, ${changeTimes(run)}`, message: run.message }));
  });
}
