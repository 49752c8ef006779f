import { expectedPresent, sharesNotBoarding, streamOfBoarders } from './census-start.ts';
import type { ExpectedPresent, ModelledPast } from './census-start.ts';
import type { AreaFlows } from './need-flows.ts';
import type { StartGroup } from './need-plan.ts';
import { streamsPerArea } from './stay-model.ts';
import type { StayModel, StayShape } from './stay-model.ts';

/** Outflow factors at which the start of an area that nobody counted is tabulated. */
export const startFactors = Float64Array.from([0.3, 0.5, 0.7, 0.85, 1, 1.2, 1.5, 2, 3]);

function cumulative(chances: readonly number[]): Float64Array {
  let sum = 0;
  return Float64Array.from(chances, (chance) => (sum += chance));
}

/** Those counted: boarding patients in the stream of boarders, the others by the model's expected present. */
export function startGroups(
  stay: StayModel,
  area: number,
  census: { present: number; boarding: number },
  present: ExpectedPresent,
): StartGroup[] {
  const boarder = streamOfBoarders(stay, area);
  return [
    {
      patients: census.boarding,
      steps: Float64Array.from({ length: streamsPerArea }, (_, s) => (s >= boarder ? 1 : 0)),
      boarding: true,
    },
    {
      patients: census.present - census.boarding,
      steps: cumulative(sharesNotBoarding(stay, area, present.means, present.undecidedAdmitted)),
      boarding: false,
    },
  ];
}

/** Mean present by stream when the outflow factor has been f for days: the start of an area that nobody counted. */
export function meansByFactor(past: ModelledPast, shapes: (StayShape | null)[] | null): Float64Array[] {
  const law = shapes ?? past.ratePerHour.map(() => null);
  const columns = Array.from(startFactors, (factor) => {
    const hazardPerHour = past.hazardPerHour.map((hazard) => hazard.map((value) => value * factor));
    return expectedPresent({ ...past, hazardPerHour }, law).means;
  });
  return past.ratePerHour.map((_, s) => Float64Array.from(columns, (means) => means[s]));
}

/** Chances of an undecided patient over all areas and streams, cumulative, by the arrivals expected at that time. */
export function arrivalMix(flows: readonly AreaFlows[], segment: number): Float64Array {
  const weights = flows.flatMap((flow) => flow.arriving.map((rate) => rate[segment]));
  const total = weights.reduce((sum, value) => sum + value, 0);
  // Without any arrivals expected, home patients of each area share them alike.
  const chances = weights.map((value, i) =>
    total > 0 ? value / total : i % streamsPerArea === 0 ? 1 / flows.length : 0,
  );
  return cumulative(chances);
}
