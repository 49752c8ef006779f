import { newcomersUnderShape, sharesNotBoarding, streamOfBoarders, survivalOf } from './census-start.ts';
import { decisionsPerHour } from './decision-stage.ts';
import type { StagedStays } from './decision-stage.ts';
import type { ExpectedPresent } from './census-start.ts';
import { binomialLaw, gammaPoissonLaw, sumOfLaws } from './count-law.ts';
import type { CountLaw } from './count-law.ts';
import type { AreaFlows } from './need-flows.ts';
import type { OutlookInput } from './outlook-types.ts';
import { admittedStream, boardingStream } from './stay-model.ts';
import type { StayShape } from './stay-model.ts';

/**
 * Which length of stay an outlook uses: the stays' own shape when it moves the 90th percentile of need by one bed (half a
 * bed and more rounds to one) in any area at any segment's end before the night is over, else the exponential. Both are compared without parameter
 * and factor variation, in closed form: newcomers Poisson with mean ∫ λ(u)·S(A(u, t)) du, those present binomial.
 * Cost: areas × streams × segments².
 */
export function chooseStayLaw(
  stay: StagedStays,
  input: OutlookInput,
  flows: readonly AreaFlows[],
  plain: readonly ExpectedPresent[],
  shaped: readonly ExpectedPresent[],
  shapesOf: (area: number) => (StayShape | null)[],
  untilHours: number,
): 'exponential' | 'empirical' {
  for (let area = 0; area < flows.length; area += 1) {
    const shapes = shapesOf(area);
    if (shapes.every((shape) => shape === null)) continue;
    const none = shapes.map(() => null);
    const exponential = percentiles(stay, area, input, flows[area], plain[area], none, untilHours);
    const empirical = percentiles(stay, area, input, flows[area], shaped[area], shapes, untilHours);
    if (exponential.some((value, k) => Math.abs(value - empirical[k]) >= 0.5)) return 'empirical';
  }
  return 'exponential';
}

function percentiles(
  stay: StagedStays,
  area: number,
  input: OutlookInput,
  flow: AreaFlows,
  present: ExpectedPresent,
  shapes: readonly (StayShape | null)[],
  untilHours: number,
): number[] {
  const { census } = input.areas[area];
  const { hours, ratePerHour, hazardPerHour } = flow.ahead;
  const count = hours.length;
  const newcomers = new Float64Array(count);
  ratePerHour.forEach((rate, s) => {
    newcomersUnderShape(hours, rate, hazardPerHour[s], shapes[s]).forEach((mean, k) => {
      newcomers[k] += mean;
    });
  });
  const others = census === null ? present.means : sharesNotBoarding(stay, area, present.means);
  // Boarding patients in the outlook who were not yet decided at its start: newcomers and those present.
  const boards = (rate: ArrayLike<number>, here: number): Float64Array => {
    const hazard = hazardPerHour[admittedStream];
    const start = { mean: here, remaining: present.remaining[admittedStream] };
    const decided = decisionsPerHour(hours, rate, hazard, shapes[admittedStream], start);
    return newcomersUnderShape(hours, decided, hazardPerHour[boardingStream], shapes[boardingStream]);
  };
  const nobody = new Float64Array(count);
  const presentBoards = stay.staged[area] ? boards(nobody, others[admittedStream]) : nobody;
  if (stay.staged[area]) {
    boards(ratePerHour[admittedStream], 0).forEach((mean, k) => {
      newcomers[k] += mean;
    });
  }
  const boarder = streamOfBoarders(stay, area);
  const spent = new Float64Array(hazardPerHour.length);
  const found: number[] = [];
  let elapsed = 0;
  for (let k = 0; k < count && elapsed < untilHours; k += 1) {
    elapsed += hours[k];
    if (k < flow.startSegment) continue;
    let alive = presentBoards[k];
    for (let s = 0; s < spent.length; s += 1) {
      spent[s] += hazardPerHour[s][k] * hours[k];
      if (others[s] > 0) alive += others[s] * survivalOf(present.remaining[s], spent[s]);
    }
    let law = gammaPoissonLaw(newcomers[k] + (census === null ? alive : 0), 0);
    if (census !== null) {
      const still = survivalOf(present.remaining[boarder], spent[boarder]);
      law = sumOfLaws(law, binomialLaw(census.present - census.boarding, Math.min(1, alive)));
      law = sumOfLaws(law, binomialLaw(census.boarding, still));
    }
    found.push(smoothQuantile(law, 0.9));
  }
  return found;
}

/** A percentile between whole numbers, linear within each number's own chance: it moves with the law, not in jumps. */
function smoothQuantile(law: CountLaw, p: number): number {
  let sum = 0;
  for (let i = 0; i < law.pmf.length; i += 1) {
    if (sum + law.pmf[i] >= p) return law.first + i - 0.5 + (p - sum) / law.pmf[i];
    sum += law.pmf[i];
  }
  return law.first + law.pmf.length - 0.5;
}
