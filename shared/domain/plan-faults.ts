import { halfHourName } from './clock-text.ts';

/** What a plan is checked against. */
export interface PlannedArea {
  id: string;
  name: string;
  /** Bed spaces that exist. */
  spaces: number;
  safeMinimum: number;
}

/** A cell of a plan that cannot be saved. */
export interface PlanFault {
  areaId: string;
  halfHour: number;
  /** The cell by name: "Acute, Monday 07:00". */
  at: string;
  message: string;
}

/** The most that a cell may say, whatever exists. */
export const mostBeds = 500;

/** Why a figure cannot stand in an area's plan; null if it can. A hole is null. */
export function bedsFault(area: Omit<PlannedArea, 'id' | 'name'>, beds: number | null): string | null {
  if (beds === null) return 'No figure stands here: the plan would have a hole.';
  if (!Number.isInteger(beds)) return `${String(beds)} is not a whole number.`;
  if (beds < 0) return `${String(beds)} is below 0.`;
  if (beds > mostBeds) return `${String(beds)} is above ${String(mostBeds)}.`;
  if (beds < area.safeMinimum) return `${String(beds)} is below the safe minimum of ${String(area.safeMinimum)}.`;
  if (beds > area.spaces) return `${String(beds)} is beyond the ${String(area.spaces)} bed spaces that exist.`;
  return null;
}

/** Every cell of one area's plan that cannot be saved, in the order of the week. */
export function planFaults(area: PlannedArea, halfHours: readonly (number | null)[]): PlanFault[] {
  const faults: PlanFault[] = [];
  for (const [halfHour, beds] of halfHours.entries()) {
    const message = bedsFault(area, beds);
    if (message !== null)
      faults.push({ areaId: area.id, halfHour, at: `${area.name}, ${halfHourName(halfHour)}`, message });
  }
  return faults;
}
