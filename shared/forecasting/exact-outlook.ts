import { sharesNotBoarding, streamOfBoarders } from './census-start.ts';
import type { ExpectedPresent } from './census-start.ts';
import { outflowPlace } from './decision-stage.ts';
import type { StagedStays } from './decision-stage.ts';
import type { PresentGroup } from './exact-need.ts';
import { lognormalNodes } from './factor-nodes.ts';
import { binSeconds } from './need-plan.ts';
import type { NeedPlan } from './need-plan.ts';
import type { OutlookInput } from './outlook-types.ts';
import { prepareNeed } from './prepare-need.ts';
import type { OutlookModel } from './prepare-need.ts';
import type { ExactArea, ExactOutlook } from './preview-need.ts';
import { streamsPerArea } from './stay-model.ts';

/** Nodes of the outflow factor in previews; the arrival factor is integrated in closed form. */
export const previewNodes = 3;

/**
 * Makes what previews start from. The outflow factors of admitted patients and others become one factor of their joint
 * variance, weighed by who is expected to be present; errors of level go into it and into the arrival factor.
 */
export function prepareExact(model: OutlookModel, input: OutlookInput): ExactOutlook & { plan: NeedPlan } {
  const { plan, flows, stay, expected } = prepareNeed(model, input);
  const { arrival } = model;
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
        present: census === null ? [] : presentGroups(stay, a, census, expected[a], input, plan),
        startMeans: census === null ? means : null,
        boarders: census?.boarding ?? 0,
        boarderStream: streamOfBoarders(stay, a),
        staged: stay.staged[a],
        arrivalVariance: Math.expm1(Math.min(1, Math.max(0, logVariance))),
        outflowNodes: lognormalNodes(outflowVariance(stay, a, means), previewNodes),
      };
    }),
  };
}

function outflowVariance(stay: StagedStays, area: number, means: readonly number[]): number {
  const { others, admitted } = stay.outflow;
  const total = means.reduce((sum, value) => sum + value, 0);
  const moved = means.reduce(
    (sum, mean, s) => sum + mean * outflowPlace(stay, stay.streams[area * streamsPerArea + s].stream),
    0,
  );
  const share = total > 0 ? moved / total : 0.5;
  const of = ({ variance, levelSe }: typeof others): number => variance + levelSe * levelSe;
  return (1 - share) ** 2 * of(others) + share ** 2 * of(admitted);
}

function presentGroups(
  stay: StagedStays,
  a: number,
  census: { present: number; boarding: number },
  expected: ExpectedPresent,
  input: OutlookInput,
  plan: NeedPlan,
): PresentGroup[] {
  const groups = [{ patients: census.present - census.boarding, shares: sharesNotBoarding(stay, a, expected.means) }];
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
