import { binSeconds } from './need-plan.ts';
import type { ExactOutlook } from './preview-need.ts';
import type { ExactWire } from './exact-wire.ts';
import { bedsByBin } from './scenario.ts';

/** What `previewNeed` starts from, out of what was sent. */
export function readExactWire(wire: ExactWire): ExactOutlook {
  const { startAt, bins } = wire;
  return {
    plan: {
      segments: wire.segmentAt.length - 1,
      segmentAt: Float64Array.from(wire.segmentAt),
      hourTo: Int32Array.from(wire.hours, (at) => Math.min(bins, Math.max(0, Math.ceil((at - startAt) / binSeconds)))),
      areas: wire.areas.map(({ staffedBeds }) => ({ beds: bedsByBin(staffedBeds, startAt, bins) })),
    },
    endSegment: Int32Array.from(wire.endSegment),
    areas: wire.areas.map(({ startSegment, ratePerHour, hazardPerHour, ...area }) => ({
      areaId: area.areaId,
      flows: {
        startSegment,
        ahead: {
          ratePerHour: ratePerHour.map((rate) => Float64Array.from(rate)),
          hazardPerHour: hazardPerHour.map((hazard) => Float64Array.from(hazard)),
        },
      },
      present: area.present,
      startMeans: area.startMeans,
      boarders: area.boarders,
      boarderStream: area.boarderStream,
      staged: area.staged,
      arrivalVariance: area.arrivalVariance,
      outflowNodes: area.outflowNodes,
    })),
  };
}
