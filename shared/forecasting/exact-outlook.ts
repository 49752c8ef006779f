import { sharesNotBoarding, streamOfBoarders } from './census-start.ts';
import type { ExpectedPresent } from './census-start.ts';
import { exactNeed } from './exact-need.ts';
import type { NeedStream, PresentGroup } from './exact-need.ts';
import { lognormalNodes } from './factor-nodes.ts';
import type { FactorNode } from './factor-nodes.ts';
import type { AreaFlows } from './need-flows.ts';
import { binSeconds } from './need-plan.ts';
import type { NeedChange, NeedPlan } from './need-plan.ts';
import type { OutlookInput } from './outlook-types.ts';
import { prepareNeed } from './prepare-need.ts';
import type { OutlookModel } from './prepare-need.ts';
import { admittedStream, boardingStream, streamsPerArea } from './stay-model.ts';
import { pmfExceedance, pmfMean, pmfQuantile } from '../stochastic/pmf.ts';

/** Nodes of the outflow factor in previews; the arrival factor is integrated in closed form. */
export const previewNodes = 3;

interface ExactArea {
  areaId: string;
  flows: AreaFlows;
  present: PresentGroup[];
  startMeans: number[] | null;
  boarders: number;
  boarderStream: number;
  arrivalVariance: number;
  outflowNodes: FactorNode[];
}

/** What previews start from; made once, then every change is answered from it. */
export interface ExactOutlook {
  areas: ExactArea[];
  plan: NeedPlan;
  /** Segment that ends at each of the outlook's hours. */
  endSegment: Int32Array;
}

/** An area's need by hour, exact for exponential stays and factors that hold over the whole horizon. */
export interface NeedPreview {
  areaId: string;
  p10: number[];
  p50: number[];
  p90: number[];
  mean: number[];
  staffed: number[];
  /** Chance that need exceeds staffed beds at the full hour. */
  shortfall: number[];
}

/**
 * Makes what previews start from. The outflow factors of admitted patients and others become one factor of their joint
 * variance, weighed by who is expected to be present; errors of level go into it and into the arrival factor.
 */
export function prepareExact(model: OutlookModel, input: OutlookInput): ExactOutlook {
  const { plan, flows, expected } = prepareNeed(model, input);
  const { arrival, stay } = model;
  const endSegment = Int32Array.from(plan.hourTo, (bin) => {
    const at = (bin * binSeconds) / 3600 - 1e-6;
    let k = 0;
    while (plan.segmentAt[k + 1] < at) k += 1;
    return k;
  });
  const level = arrival.site.covariance[0] + arrival.factorVariance;
  return {
    plan,
    endSegment,
    areas: input.areas.map(({ areaId, census }, a): ExactArea => {
      const { means } = expected[a];
      const own = arrival.areas[a];
      const logVariance = level + own.own.covariance[0] + own.factorVariance;
      return {
        areaId,
        flows: flows[a],
        present: census === null ? [] : presentGroups(model, a, census, expected[a], input, plan),
        startMeans: census === null ? means : null,
        boarders: census?.boarding ?? 0,
        boarderStream: streamOfBoarders(stay, a),
        arrivalVariance: Math.expm1(Math.min(1, Math.max(0, logVariance))),
        outflowNodes: lognormalNodes(outflowVariance(model, means), previewNodes),
      };
    }),
  };
}

function outflowVariance(model: OutlookModel, means: readonly number[]): number {
  const { others, admitted } = model.stay.outflow;
  const total = means.reduce((sum, value) => sum + value, 0);
  const share = total > 0 ? (means[admittedStream] + means[boardingStream]) / total : 0.5;
  const of = ({ variance, levelSe }: typeof others): number => variance + levelSe * levelSe;
  return (1 - share) ** 2 * of(others) + share ** 2 * of(admitted);
}

function presentGroups(
  model: OutlookModel,
  a: number,
  census: { present: number; boarding: number },
  expected: ExpectedPresent,
  input: OutlookInput,
  plan: NeedPlan,
): PresentGroup[] {
  const groups = [
    { patients: census.present - census.boarding, shares: sharesNotBoarding(model.stay, a, expected.means) },
  ];
  const undecided = input.undecided?.waiting ?? 0;
  if (undecided > 0 && plan.undecided !== null) {
    const { steps } = plan.undecided;
    const shares = Array.from({ length: streamsPerArea }, (_, s) => {
      const place = a * streamsPerArea + s;
      return steps[place] - (place > 0 ? steps[place - 1] : 0);
    });
    groups.push({ patients: undecided, shares });
  }
  return groups;
}

/** How much of segment k lies between two times, 0..1. */
function overlap(plan: NeedPlan, k: number, from: number, to: number): number {
  const start = plan.segmentAt[k];
  const end = plan.segmentAt[k + 1];
  return Math.max(0, Math.min(end, to) - Math.max(start, from)) / (end - start);
}

/**
 * Answers a change at once, by the exact method for exponential stays: what a slider shows before "confirm" runs the
 * simulation. @returns one preview an area. Cost: 6 areas × 168 hours in about 10 ms.
 */
export function previewNeed(exact: ExactOutlook, change: NeedChange = {}): NeedPreview[] {
  const { plan, areas, endSegment } = exact;
  const { segments, segmentAt } = plan;
  const rates = areas.map(({ flows }, a) =>
    flows.ahead.ratePerHour.map((rate) => rate.map((value) => value * (change.demand?.[a] ?? 1))),
  );
  change.surge?.forEach(({ area, fromHours, toHours, ratePerHour }) => {
    const expected = areas[area].flows.ahead.ratePerHour;
    for (let k = 0; k < segments; k += 1) {
      const total = expected.reduce((sum, rate) => sum + rate[k], 0);
      const more = ratePerHour * overlap(plan, k, fromHours, toHours);
      expected.forEach((rate, s) => {
        rates[area][s][k] += more * (total > 0 ? rate[k] / total : s === 0 ? 1 : 0);
      });
    }
  });
  change.closed?.forEach(({ area, fromHours, toHours, to }) => {
    rates[area].forEach((rate, s) => {
      for (let k = 0; k < segments; k += 1) {
        const moved = rate[k] * overlap(plan, k, fromHours, toHours);
        rate[k] -= moved;
        if (to !== null) rates[to][s][k] += moved;
      }
    });
  });
  return areas.map((area, a) => {
    const { startSegment } = area.flows;
    const streams = area.flows.ahead.hazardPerHour.map((hazard, s): NeedStream => {
      const longer = Math.max(1e-6, change.stay?.[a * streamsPerArea + s] ?? 1);
      return {
        ratePerHour: rates[a][s].subarray(startSegment),
        hazardPerHour: hazard.subarray(startSegment).map((value) => value / longer),
      };
    });
    const nobody = new Float64Array(segments - startSegment);
    const present = area.present.map((group) => ({ ...group, shares: [...group.shares] }));
    let left = area.boarders;
    const boarding = streams[area.boarderStream].hazardPerHour;
    for (const { patients, byHours } of change.boardersOut?.filter((one) => one.area === a) ?? []) {
      const out = Math.min(left, patients);
      left -= out;
      // A stream of their own, in which nobody stays past the hour.
      const gone = Float64Array.from(boarding, (hazard, k) =>
        segmentAt[startSegment + k + 1] >= byHours ? 1e6 : hazard,
      );
      streams.push({ ratePerHour: nobody, hazardPerHour: gone });
      present.push({ patients: out, shares: streams.map((_, s) => (s === streams.length - 1 ? 1 : 0)) });
    }
    if (area.startMeans === null) {
      present.push({ patients: left, shares: streams.map((_, s) => (s === area.boarderStream ? 1 : 0)) });
    }
    const laws = exactNeed({
      hours: Float64Array.from(nobody, (_, k) => segmentAt[startSegment + k + 1] - segmentAt[startSegment + k]),
      streams,
      present: present.map(({ patients, shares }) => ({ patients, shares: streams.map((_, s) => shares[s] ?? 0) })),
      startMeans: area.startMeans ?? undefined,
      arrivalVariance: area.arrivalVariance,
      outflowFactor: area.outflowNodes,
    });
    const wanted = Array.from(endSegment, (k) => laws[k - startSegment]);
    const beds = change.beds?.[a] ?? plan.areas[a].beds;
    const staffed = Array.from(plan.hourTo, (bin) => beds[bin - 1]);
    return {
      areaId: area.areaId,
      p10: wanted.map((law) => pmfQuantile(law, 0.1)),
      p50: wanted.map((law) => pmfQuantile(law, 0.5)),
      p90: wanted.map((law) => pmfQuantile(law, 0.9)),
      mean: wanted.map(pmfMean),
      staffed,
      shortfall: wanted.map((law, h) => Math.min(1, pmfExceedance(law, staffed[h]))),
    };
  });
}
