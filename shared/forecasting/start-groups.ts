import { expectedPresent, sharesNotBoarding, streamOfBoarders, survivalOf } from './census-start.ts';
import type { ExpectedPresent, ModelledPast } from './census-start.ts';
import { outflowPlace } from './decision-stage.ts';
import type { StagedStays } from './decision-stage.ts';
import type { AreaFlows } from './need-flows.ts';
import type { StartGroup } from './need-plan.ts';
import { admittedStream, streamsPerArea } from './stay-model.ts';
import type { StayShape } from './stay-model.ts';

/** Outflow factors at which the start of an area that nobody counted is tabulated. */
export const startFactors = Float64Array.from([0.3, 0.5, 0.7, 0.85, 1, 1.2, 1.5, 2, 3]);

function cumulative(chances: readonly number[]): Float64Array {
  let sum = 0;
  return Float64Array.from(chances, (chance) => (sum += chance));
}

/**
 * Those counted: boarding patients in the stream of boarders, the others by the model's expected present. When wards took
 * patients slowly, more of those present are admitted and will go on leaving slowly: the chances go with the outflow factor.
 * @param past what the census came from. @param law of an admitted patient's time until the group is left, in means
 */
export function startGroups(
  stay: StagedStays,
  area: number,
  census: { present: number; boarding: number },
  present: ExpectedPresent,
  past: ModelledPast,
  law: StayShape | null,
): StartGroup[] {
  const boarder = streamOfBoarders(stay, area);
  const usual = sharesNotBoarding(stay, area, present.means);
  const admitted = stay.streams[area * streamsPerArea + admittedStream].stream;
  // Those being treated are as many as ever when it is only the wards that are slow.
  const more =
    outflowPlace(stay, admitted) === 1 ? admittedByFactor(past, law, stay.outflow.admitted.correlation) : null;
  return [
    {
      patients: census.boarding,
      steps: Float64Array.from({ length: streamsPerArea }, (_, s) => (s >= boarder ? 1 : 0)),
      boarding: true,
    },
    {
      patients: census.present - census.boarding,
      steps: cumulative(usual),
      stepsByFactor:
        more === null
          ? undefined
          : Array.from(more, (ratio) => {
              const total = 1 + usual[admittedStream] * (ratio - 1);
              return cumulative(usual.map((share, s) => (share * (s === admittedStream ? ratio : 1)) / total));
            }),
      boarding: false,
    },
  ];
}

/**
 * By how much more admitted patients there are when the outflow factor is f now, for each of `startFactors`: the factor of
 * a day d days ago is taken as f^(correlation^d), of hours in between by the share of them on either day.
 */
function admittedByFactor(past: ModelledPast, law: StayShape | null, correlation: number): Float64Array {
  const hazard = past.hazardPerHour[admittedStream];
  const rate = past.ratePerHour[admittedStream];
  const means = startFactors.map((factor) => {
    let age = 0;
    let back = 0;
    let mean = 0;
    for (let k = rate.length - 1; k >= 0; k -= 1) {
      const length = past.hours[k];
      const days = (back + length / 2) / 24;
      const day = Math.floor(days);
      const kept = correlation ** day * (1 - (days - day) * (1 - correlation));
      const spent = hazard[k] * length * factor ** kept;
      mean += rate[k] * length * survivalOf(law, age + spent / 2);
      age += spent;
      back += length;
    }
    return mean;
  });
  const usual = means[startFactors.indexOf(1)];
  return means.map((mean) => (usual > 0 ? mean / usual : 1));
}

/** Mean present by stream when the outflow factor has been f for days: the start of an area that nobody counted. @param past with the decisions where the area is staged */
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
