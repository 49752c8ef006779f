import type { AreaPlan, NeedPlan } from '../../shared/forecasting/need-plan.ts';
import { binSeconds } from '../../shared/forecasting/need-plan.ts';
import { hoursOfBins } from '../../shared/forecasting/prepare-need.ts';
import { streamsPerArea } from '../../shared/forecasting/stay-model.ts';
import type { StayShape } from '../../shared/forecasting/stay-model.ts';

/** An area with known rates and hazards, one figure an hour; all parameters certain. */
export interface KnownArea {
  rates: number[];
  /** Departures an hour, by hour, of the four dispositions and boarding. */
  hazards: number[][];
  shares: [number, number, number, number];
  present: number;
  /** Chances of the five streams for those present. */
  presentShares: number[];
  boarding?: number;
  beds: number;
  /** True for an area that prints the chance within the hour. */
  wholeHour?: boolean;
  shape?: StayShape | null;
  /** The admitted stream's hazard is that of the decision, and boarding follows it. */
  staged?: boolean;
}

/** A plan whose parameters are all known, so that a simulation can be held against exact methods. */
export function buildNeedPlan(areas: KnownArea[], seed: number, shifts: [from: number, to: number][] = []): NeedPlan {
  const hours = areas[0].rates.length;
  const bins = (hours * 3600) / binSeconds;
  const perHour = 3600 / binSeconds;
  const hourFrom = Int32Array.from({ length: hours }, (_, h) => h * perHour);
  const hourTo = Int32Array.from({ length: hours }, (_, h) => (h + 1) * perHour);
  const cumulative = (chances: number[]): Float64Array => {
    let sum = 0;
    return Float64Array.from(chances, (chance) => (sum += chance));
  };
  return {
    seed,
    startAt: 0,
    segments: hours,
    segmentAt: Float64Array.from({ length: hours + 1 }, (_, k) => k),
    shareBlock: new Uint8Array(hours),
    shareBlocks: 1,
    areas: areas.map((area): AreaPlan => {
      const shapes = Array.from({ length: streamsPerArea }, () => area.shape ?? null);
      return {
        startHours: 0,
        startSegment: 0,
        groups: [
          { patients: area.boarding ?? 0, steps: Float64Array.of(0, 0, 0, 0, 1), boarding: true },
          { patients: area.present - (area.boarding ?? 0), steps: cumulative(area.presentShares), boarding: false },
        ],
        startMeans: null,
        startFactors: Float64Array.of(1),
        expectedFirstRate: area.rates[0],
        remaining: shapes,
        shapes,
        beds: new Int32Array(bins).fill(area.beds),
        highest: 400,
        boarders: area.boarding ?? 0,
        staged: area.staged ?? false,
        outflowPlaces: [0, 1, 0, 0, 1],
        wholeHour: area.wholeHour ?? false,
      };
    }),
    undecided: null,
    bins,
    hourFrom,
    hourTo,
    hourOfBin: hoursOfBins(bins, hourFrom, hourTo),
    shiftFrom: Int32Array.from(shifts, ([from]) => from * perHour),
    shiftTo: Int32Array.from(shifts, ([, to]) => to * perHour),
    nightTo: bins,
    drawRates: (_, out) => {
      areas.forEach((area, a) => {
        out[a].set(area.rates);
      });
    },
    drawStays: (_, __, out) => {
      areas.forEach((area, a) => {
        area.hazards.forEach((hazard, s) => {
          out.spent.set(cumulative(hazard), (a * streamsPerArea + s) * (hours + 2) + 1);
        });
        out.shareSteps.set(cumulative(area.shares).subarray(0, 3), a * 3);
      });
    },
  };
}
