import { drawBeta } from '../stochastic/beta.ts';
import type { RandomStream } from '../stochastic/random.ts';

/** Hours in one block of the day within which the share of arrivals by ambulance is held alike. */
export const ambulanceBlockHours = 4;
export const ambulanceBlocks = 24 / ambulanceBlockHours;

/** Arrivals whose way of coming is known, and those of them who came by ambulance: [area][block of the day]. */
export interface AmbulanceCounts {
  known: readonly (readonly number[])[];
  byAmbulance: readonly (readonly number[])[];
}

/** A block's share is held to its area's by as much as so many arrivals. */
const strength = 20;

/**
 * Makes a function that draws the share of arrivals by ambulance, [area · blocks + block], from its posterior: beta about
 * the block's own counts, with the area's share (and for an area without counts the site's) as its prior. An arrival comes
 * by ambulance or not independently of the others, so the ambulances of a Poisson stream are Poisson of rate share × rate
 * (thinning; Kingman 1993, Poisson Processes, section 5.1).
 * @throws RangeError when counts are not whole, or more came by ambulance than are known.
 */
export function makeAmbulanceDraw(counts: AmbulanceCounts): (stream: RandomStream, out: Float64Array) => void {
  const sum = (values: readonly number[]): number => values.reduce((all, value) => all + value, 0);
  counts.known.forEach((known, a) => {
    known.forEach((n, block) => {
      const k = counts.byAmbulance[a][block];
      if (!(Number.isInteger(n) && Number.isInteger(k) && k >= 0 && n >= k)) {
        throw new RangeError(`ambulance counts of area ${a}, block ${block} are ${k} of ${n}`);
      }
    });
  });
  const share = (part: number, all: number, prior: number): number => (part + strength * prior) / (all + strength);
  const site = share(sum(counts.byAmbulance.map(sum)), sum(counts.known.map(sum)), 0.5);
  const shapes = counts.known.flatMap((known, a) => {
    const area = share(sum(counts.byAmbulance[a]), sum(known), site);
    return known.map((n, block) => {
      const k = counts.byAmbulance[a][block];
      return { a: k + strength * area, b: n - k + strength * (1 - area) };
    });
  });
  return (stream, out) => {
    shapes.forEach(({ a, b }, i) => {
      out[i] = drawBeta(stream, a, b);
    });
  };
}
