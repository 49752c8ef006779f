import { pmfExceedance } from '../stochastic/pmf.ts';
import { finiteBeds } from './finite-beds.ts';
import type { FiniteBedsInput } from './finite-beds.ts';

/** Beds for a delay target. */
export interface DelayStaffing {
  beds: Int32Array;
  /** Chance that an arrival at the end of each segment finds no bed free; at most the target. */
  delay: Float64Array;
}

/**
 * The fewest beds by segment that keep the chance of having to wait at a target: iterative staffing (Feldman, Mandelbaum,
 * Massey & Whitt 2008, Management Science 54, 324) on the exact finite-bed law. Delay at one time depends on beds up to
 * then only, so the iteration is done segment by segment in order of time: beds c give a law, whose smallest x with
 * P(N ≥ x) ≤ target is the next c, kept within what is known to be too few and enough. At constant rates it ends at the
 * least servers with Erlang C ≤ target. Where even `most` beds are too few, `most` stands and `delay` shows it.
 * @throws RangeError on a bad target. Cost: about six segments' laws a segment.
 */
export function staffForDelay(input: Omit<FiniteBedsInput, 'beds'>, target: number): DelayStaffing {
  if (!(target > 0 && target < 1)) throw new RangeError(`target must lie between 0 and 1, got ${target}`);
  const segments = input.hours.length;
  const most = input.most ?? 400;
  const beds = new Int32Array(segments);
  const delay = new Float64Array(segments);
  let state = input.start;
  for (let k = 0; k < segments; k += 1) {
    const lawWith = (c: number): Float64Array =>
      finiteBeds({
        hours: [input.hours[k]],
        ratePerHour: [input.ratePerHour[k]],
        hazardPerHour: [input.hazardPerHour[k]],
        beds: [c],
        start: state,
        most,
      })[0];
    let tooFew = -1;
    let enough = most;
    let law = lawWith(most);
    let found = law;
    let c = smallestWithin(law, target);
    while (enough - tooFew > 1) {
      // A step past what is known (few beds make a long queue, which asks for far too many) halves the rest instead.
      if (c <= tooFew || c >= enough) c = c <= tooFew ? tooFew + 1 : (tooFew + enough) >> 1;
      law = lawWith(c);
      if (pmfExceedance(law, c - 1) <= target) {
        enough = c;
        found = law;
      } else tooFew = c;
      c = smallestWithin(law, target);
    }
    beds[k] = enough;
    delay[k] = pmfExceedance(found, enough - 1);
    state = found;
  }
  return { beds, delay };
}

/** Smallest x with P(N ≥ x) ≤ target. */
function smallestWithin(law: Float64Array, target: number): number {
  let above = 0;
  let x = law.length;
  while (x > 0 && above + law[x - 1] <= target) {
    above += law[x - 1];
    x -= 1;
  }
  return x;
}
