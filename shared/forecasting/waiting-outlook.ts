import { makeZone } from '../domain/zoned-time.ts';
import { makeStream } from '../stochastic/random.ts';
import { checkOutlookInput } from './check-outlook-input.ts';
import { sharesNotBoarding } from './census-start.ts';
import { chanceOf, percentilesOf } from './need-histogram.ts';
import { purposes } from './need-plan.ts';
import type { Chance, OutlookInput, PercentilesByHour } from './outlook-types.ts';
import type { OutlookModel } from './prepare-need.ts';
import { expectedRates, makeRateDraw } from './rate-draws.ts';
import { makeRateGrid } from './rate-grid.ts';
import { blockOf, holidayNumbers } from './stay-clock.ts';
import { expectedStays, makeStayBuffers, makeStayDraw, staySegments } from './stay-draw.ts';
import { admittedStream, streamsPerArea } from './stay-model.ts';
import type { WaitingPart, WaitingPlan } from './waiting-simulation.ts';

/** Streams that take a bed space: home, admitted, transferred. */
const bedStreams = 3;

/** Waiting by the hour of arrival; an hour without arrivals in any replication has null. */
export interface WaitingByHour {
  hours: number[];
  waiting: PercentilesByHour;
  meanWaitMinutes: (number | null)[];
  overLimit: (Chance | null)[];
  leftBeforeTreatment: (Chance | null)[];
  /** Said wherever these figures stand. */
  caution: string;
}

function roundShares(total: number, shares: readonly number[]): number[] {
  const exact = shares.map((share) => share * total);
  const whole = exact.map(Math.floor);
  const order = exact.map((value, i) => ({ i, rest: value - whole[i] })).sort((a, b) => b.rest - a.rest || a.i - b.i);
  let left = total - whole.reduce((a, b) => a + b, 0);
  for (const { i } of order) {
    if (left <= 0) break;
    whole[i] += 1;
    left -= 1;
  }
  return whole;
}

/**
 * Makes the plan for simulating waits in one area whose bed-space times are loaded; null where they are not. Bed-space
 * stays have the hazard fitted to them, with the departures' pattern by block, the outflow factor and the errors of
 * estimation of the whole stays. Impatience is a competing risk.
 */
export function prepareWaiting(
  model: OutlookModel,
  input: OutlookInput,
  area: number,
  waitLimitHours: number,
): WaitingPlan | null {
  const { arrival, stay, calendar } = model;
  checkOutlookInput(input, stay.areas);
  const bedSpace = stay.bedSpace[area] ?? null;
  const inBeds = bedSpace?.departures.slice(0, bedStreams).reduce((a, b) => a + b, 0) ?? 0;
  if (bedSpace === null || inBeds === 0) return null;
  const zone = makeZone(input.timeZone);
  const { issuedAt, hours } = input;
  const grid = makeRateGrid(zone, issuedAt, hours[hours.length - 1]);
  const holidays = holidayNumbers(stay.holidays);
  const staying = staySegments(stay, grid.localHour, (hour) => blockOf(hour, stay.blockHours, holidays));
  const segments = grid.hours.length;
  const rates = expectedRates(arrival, grid, calendar);
  const buffers = makeStayBuffers(stay, segments);
  const rateBuffers = rates.map((rate) => rate.slice());
  const drawRates = makeRateDraw(arrival, grid, calendar);
  const drawStays = makeStayDraw(stay, staying);
  const joint = makeStream(input.seed);
  const path = makeStream(input.seed);
  // Bed-space stays are shorter than whole stays; everything else about their hazard is the whole stay's.
  const ratios = Array.from({ length: bedStreams }, (_, s) => {
    const whole = stay.streams[area * streamsPerArea + s];
    const own = bedSpace.departures[s] / bedSpace.hoursInBedSpace[s];
    return own > 0 && own < Infinity && whole.departuresPerHour !== null ? own / whole.departuresPerHour : 1;
  });
  const hazardPerHour = ratios.map(() => new Float64Array(segments));
  const setHazards = (hazard: Float64Array): void => {
    ratios.forEach((ratio, s) => {
      const from = (area * streamsPerArea + s) * segments;
      for (let k = 0; k < segments; k += 1) hazardPerHour[s][k] = hazard[from + k] * ratio;
    });
  };
  setHazards(expectedStays(stay, staying).hazard);
  const { census, staffedBeds } = input.areas[area];
  const present = census?.present ?? 0;
  const waiting = census?.waiting ?? 0;
  const boarding = census?.boarding ?? 0;
  const shares = stay.shares[area].alpha.reduce((sum, alpha) => sum.map((value, d) => value + alpha[d]), [0, 0, 0, 0]);
  const means = sharesNotBoarding(stay, area, [...shares, 0]).slice(0, bedStreams);
  const meanTotal = means.reduce((a, b) => a + b, 0);
  const others = roundShares(
    present - waiting - boarding,
    means.map((value) => value / meanTotal),
  );
  others[admittedStream] += boarding;
  const used = bedSpace.departures.slice(0, bedStreams);
  let sum = 0;
  return {
    seed: input.seed,
    segmentAt: Float64Array.from([...grid.startAt, hours[hours.length - 1]], (at) => (at - issuedAt) / 3600),
    beds: Int32Array.from(grid.startAt, (at) => staffedBeds.findLast((step) => step.at <= at)?.beds ?? 0),
    steps: Float64Array.from(used, (count) => (sum += count / inBeds)),
    hazardPerHour,
    impatiencePerHour: bedSpace.hoursWaiting > 0 ? bedSpace.leftBeforeTreatment / bedSpace.hoursWaiting : 0,
    inBedSpaces: others,
    waiting,
    waitLimitHours,
    highest: Math.min(2000, 4 * (present + 40) + Math.ceil(Math.max(...rates[area]) * 24)),
    ...drawing(),
  };

  function drawing(): Pick<WaitingPlan, 'ratePerHour' | 'redraw'> {
    const ratePerHour = rates[area].slice();
    return {
      ratePerHour,
      redraw: (replication) => {
        joint.reseed(input.seed, purposes.rates, replication);
        drawRates(joint, rateBuffers);
        ratePerHour.set(rateBuffers[area]);
        joint.reseed(input.seed, purposes.parameters, replication);
        path.reseed(input.seed, purposes.outflow, replication);
        drawStays(joint, path, buffers);
        setHazards(buffers.hazard);
      },
    };
  }
}

/** Waits by hour of arrival from the parts of a simulation. @param hours full hours at the segments' ends, UTC seconds. */
export function finishWaiting(parts: readonly WaitingPart[], hours: readonly number[]): WaitingByHour {
  if (parts.length === 0) throw new RangeError('no parts to finish');
  const total = (key: 'waiting' | 'arrivals' | 'secondsWaited' | 'overLimit' | 'left'): Float64Array => {
    const all = new Float64Array(parts[0][key].length);
    for (const part of parts) for (let i = 0; i < all.length; i += 1) all[i] += part[key][i];
    return all;
  };
  const { size } = parts[0];
  const arrivals = total('arrivals');
  const seconds = total('secondsWaited');
  const over = total('overLimit');
  const left = total('left');
  const waiting = total('waiting');
  const of = (counts: Float64Array): (Chance | null)[] =>
    Array.from(counts, (count, k) => (arrivals[k] > 0 ? chanceOf(count, arrivals[k]) : null));
  return {
    hours: [...hours],
    waiting: percentilesOf(Array.from(arrivals, (_, k) => waiting.subarray(k * size, (k + 1) * size))),
    meanWaitMinutes: Array.from(seconds, (value, k) => (arrivals[k] > 0 ? value / arrivals[k] / 60 : null)),
    overLimit: of(over),
    leftBeforeTreatment: of(left),
    caution: 'Patients are served in order of arrival here; in truth less urgent patients wait longer.',
  };
}
