import type { BedStep } from '../domain/bed-schedule.ts';
import type { PresentGroup } from './exact-need.ts';
import { prepareExact } from './exact-outlook.ts';
import type { FactorNode } from './factor-nodes.ts';
import type { OutlookInput } from './outlook-types.ts';
import type { OutlookModel } from './prepare-need.ts';

/** What previews start from, small enough to be sent: six significant digits. */
export interface ExactWire {
  /** UTC seconds of time 0. */
  startAt: number;
  bins: number;
  /** Full local hours that are answered for, UTC seconds. */
  hours: number[];
  /** Start of every segment and the end of the last, hours since the start. */
  segmentAt: number[];
  endSegment: number[];
  areas: ExactWireArea[];
}

export interface ExactWireArea {
  areaId: string;
  startSegment: number;
  /** [stream][segment]: arrivals and departures an hour. */
  ratePerHour: number[][];
  hazardPerHour: number[][];
  present: PresentGroup[];
  startMeans: number[] | null;
  boarders: number;
  boarderStream: number;
  staged: boolean;
  arrivalVariance: number;
  outflowNodes: FactorNode[];
  staffedBeds: BedStep[];
}

const short = (value: number): number => Number(value.toPrecision(6));

/**
 * Prepares the exact method for a browser. @throws RangeError naming a bad input. Cost: about 60 ms for 5 areas × 168
 * hours, so it belongs on a thread; about 70 kB as text for that size.
 */
export function makeExactWire(model: OutlookModel, input: OutlookInput): ExactWire {
  const { areas, plan, endSegment } = prepareExact(model, input);
  return {
    startAt: plan.startAt,
    bins: plan.bins,
    hours: [...input.hours],
    segmentAt: Array.from(plan.segmentAt, (at) => Math.round(at * 1e6) / 1e6),
    endSegment: Array.from(endSegment),
    areas: areas.map(({ flows, ...area }, a) => ({
      areaId: area.areaId,
      startSegment: flows.startSegment,
      ratePerHour: flows.ahead.ratePerHour.map((rate) => Array.from(rate, short)),
      hazardPerHour: flows.ahead.hazardPerHour.map((hazard) => Array.from(hazard, short)),
      present: area.present,
      startMeans: area.startMeans,
      boarders: area.boarders,
      boarderStream: area.boarderStream,
      staged: area.staged,
      arrivalVariance: area.arrivalVariance,
      outflowNodes: area.outflowNodes,
      staffedBeds: [...input.areas[a].staffedBeds],
    })),
  };
}
