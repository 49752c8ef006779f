import { bedsAt, type BedStep } from '../domain/bed-schedule.ts';
import { bedWindows, changedBeds, type PlanChange } from '../domain/plan-change.ts';
import { binSeconds } from './need-plan.ts';
import type { NeedChange } from './need-plan.ts';
import { admittedStream, boardingStream, streamsPerArea } from './stay-model.ts';

/** What a plan's changes are translated by. */
export interface ScenarioFrame {
  /** UTC seconds of time 0 of the need plan. */
  startAt: number;
  /** Time bins of the need plan. */
  bins: number;
  /** In the model's order. */
  areas: readonly { areaId: string; staffedBeds: readonly BedStep[] }[];
}

/**
 * A plan's changes, which name areas and instants, as the engine's change of a need plan. Several changes of one thing
 * multiply (percentages) or add up (beds, patients). The changes must be checked (`checkPlanChanges`) before.
 * @throws RangeError naming an area that is not in the frame.
 */
export function needChangeOf(changes: readonly PlanChange[], frame: ScenarioFrame): NeedChange {
  const { startAt, bins, areas } = frame;
  const placeOf = (areaId: string): number => {
    const place = areas.findIndex((area) => area.areaId === areaId);
    if (place < 0) throw new RangeError(`areaId is not an area of the frame: ${areaId}`);
    return place;
  };
  const placesOf = (areaId: string | null): number[] => (areaId === null ? areas.map((_, a) => a) : [placeOf(areaId)]);
  const hours = (at: number): number => (at - startAt) / 3600;
  const demand = new Array<number>(areas.length).fill(1);
  const stay = new Array<number>(areas.length * streamsPerArea).fill(1);
  const change: NeedChange = {};
  for (const one of changes) {
    if (one.kind === 'demand') {
      for (const a of placesOf(one.areaId)) demand[a] *= 1 + one.percent / 100;
      change.demand = demand;
    } else if (one.kind === 'stay') {
      const streams =
        one.who === 'admitted' ? [admittedStream, boardingStream] : Array.from({ length: streamsPerArea }, (_, s) => s);
      for (const a of placesOf(one.areaId)) {
        for (const s of streams) stay[a * streamsPerArea + s] *= 1 + one.percent / 100;
      }
      change.stay = stay;
    } else if (one.kind === 'boarding out') {
      change.boardersOut ??= [];
      change.boardersOut.push({ area: placeOf(one.areaId), patients: one.patients, byHours: hours(one.by) });
    } else if (one.kind === 'surge') {
      const [fromHours, toHours] = [hours(one.from), hours(one.to)];
      change.surge ??= [];
      change.surge.push({
        area: placeOf(one.areaId),
        fromHours,
        toHours,
        ratePerHour: one.patients / (toHours - fromHours),
      });
    } else if (one.kind === 'closed') {
      change.closed ??= [];
      change.closed.push({
        area: placeOf(one.areaId),
        fromHours: hours(one.from),
        toHours: hours(one.to),
        to: one.toAreaId === null ? null : placeOf(one.toAreaId),
      });
    }
  }
  change.closed?.sort((a, b) => a.area - b.area || a.fromHours - b.fromHours);
  if (changes.some((one) => one.kind === 'beds')) {
    change.beds = areas.map(({ areaId, staffedBeds }) => {
      const windows = bedWindows(changes, areaId);
      return windows.length === 0 ? null : bedsByBin(changedBeds(staffedBeds, windows), startAt, bins);
    });
  }
  return change;
}

/** Staffed beds in force at the end of every bin. */
export function bedsByBin(steps: readonly BedStep[], startAt: number, bins: number): Int32Array {
  return Int32Array.from({ length: bins }, (_, b) => bedsAt(steps, startAt + (b + 1) * binSeconds));
}
