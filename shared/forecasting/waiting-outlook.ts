import { makeZone } from '../domain/zoned-time.ts';
import { makeStream } from '../stochastic/random.ts';
import { checkOutlookInput } from './check-outlook-input.ts';
import type { RateGrid } from './arrival-model.ts';
import { sharesNotBoarding } from './census-start.ts';
import { purposes } from './need-plan.ts';
import type { OutlookInput } from './outlook-types.ts';
import { cutGrid } from './prepare-need.ts';
import type { OutlookModel } from './prepare-need.ts';
import { expectedRates, makeRateDraw } from './rate-draws.ts';
import { makeRateGrid } from './rate-grid.ts';
import { blockOf, holidayNumbers } from './stay-clock.ts';
import { expectedStays, makeStayBuffers, makeStayDraw, staySegments } from './stay-draw.ts';
import { admittedStream, streamsPerArea } from './stay-model.ts';
import type { StayModel } from './stay-model.ts';
import type { WaitingPart, WaitingPlan } from './waiting-simulation.ts';
import { withCalendar } from './with-calendar.ts';

/** Streams that take a bed space: home, admitted, transferred. */
const bedStreams = 3;

/** Waits for a bed space in one area by shift of arrival. */
export interface ShiftWaits {
  /** Arrivals of the shift, on average. */
  arrivals: number;
  /** Minutes from arrival to a bed space, or to leaving without one; null where nobody arrives. */
  meanMinutes: number | null;
  /** Share of the shift's arrivals who wait longer than the limit; null where nobody arrives. */
  overLimit: number | null;
}

/** What a plan changes about waits in one area, by segment of the waiting plan. */
export interface WaitingChange {
  /** Arrivals an hour, from every area's. */
  rate: (rates: readonly Float64Array[], segment: number) => number;
  /** What a departure hazard is divided by, home, admitted, transferred: the factor on stays. */
  stay: readonly number[];
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

/** What the waiting plans of a site's areas share: made once, drawn once a replication. */
export interface WaitingGround {
  input: OutlookInput;
  stay: StayModel;
  grid: RateGrid;
  /** Arrivals an hour by area, as expected and as last drawn. */
  rates: Float64Array[];
  drawnRates: Float64Array[];
  /** Departure hazards an hour, [stream · segments + segment], as expected and as last drawn. */
  hazard: Float64Array;
  drawnHazard: Float64Array;
  draw: (replication: number) => void;
}

/**
 * Prepares what waits are simulated on. Segments end where any area's beds change.
 * @param cuts further instants at which segments are to end, UTC seconds: plans of the same cuts and steps share their
 *   random numbers
 */
export function prepareWaitingGround(
  model: OutlookModel,
  input: OutlookInput,
  cuts: readonly number[] = [],
): WaitingGround {
  const { arrival, stay, calendar } = withCalendar(model, input);
  checkOutlookInput(input, stay.areas);
  const { issuedAt, hours, seed } = input;
  const steps = input.areas.flatMap(({ staffedBeds }) => staffedBeds.map(({ at }) => at));
  const whole = makeRateGrid(makeZone(input.timeZone), issuedAt, hours[hours.length - 1]);
  const grid = cutGrid(whole, [...steps, ...cuts]);
  const holidays = holidayNumbers(stay.holidays);
  const staying = staySegments(stay, grid.localHour, (hour) => blockOf(hour, stay.blockHours, holidays));
  const rates = expectedRates(arrival, grid, calendar);
  const drawnRates = rates.map((rate) => rate.slice());
  const buffers = makeStayBuffers(stay, grid.hours.length);
  const drawRates = makeRateDraw(arrival, grid, calendar);
  const drawStays = makeStayDraw(stay, staying);
  const joint = makeStream(seed);
  const path = makeStream(seed);
  let drawn = -1;
  return {
    input,
    stay,
    grid,
    rates,
    drawnRates,
    hazard: expectedStays(stay, staying).hazard,
    drawnHazard: buffers.hazard,
    draw: (replication) => {
      if (replication === drawn) return;
      drawn = replication;
      joint.reseed(seed, purposes.rates, replication);
      drawRates(joint, drawnRates);
      joint.reseed(seed, purposes.parameters, replication);
      path.reseed(seed, purposes.outflow, replication);
      drawStays(joint, path, buffers);
    },
  };
}

/**
 * Makes the plan for simulating waits in one area whose bed-space times are loaded; null where they are not. Bed-space
 * stays have the hazard fitted to them, with the departures' pattern by block, the outflow factor and the errors of
 * estimation of the whole stays. Impatience is a competing risk. Beds are those of the input, at their own half hours.
 * @param change what a plan changes of arrivals and stays; null leaves them
 */
export function prepareWaiting(
  ground: WaitingGround,
  area: number,
  waitLimitHours: number,
  change: WaitingChange | null = null,
): WaitingPlan | null {
  const { input, stay, grid, rates, drawnRates } = ground;
  const bedSpace = stay.bedSpace[area] ?? null;
  const inBeds = bedSpace?.departures.slice(0, bedStreams).reduce((a, b) => a + b, 0) ?? 0;
  if (bedSpace === null || inBeds === 0) return null;
  const { issuedAt, hours, seed } = input;
  const segments = grid.hours.length;
  // Bed-space stays are shorter than whole stays; everything else about their hazard is the whole stay's.
  const ratios = Array.from({ length: bedStreams }, (_, s) => {
    const whole = stay.streams[area * streamsPerArea + s];
    const own = bedSpace.departures[s] / bedSpace.hoursInBedSpace[s];
    const ratio = own > 0 && own < Infinity && whole.departuresPerHour !== null ? own / whole.departuresPerHour : 1;
    return ratio / (change?.stay[s] ?? 1);
  });
  const hazardPerHour = ratios.map(() => new Float64Array(segments));
  const ratePerHour = new Float64Array(segments);
  const setTo = (from: readonly Float64Array[], hazard: Float64Array): void => {
    ratios.forEach((ratio, s) => {
      const first = (area * streamsPerArea + s) * segments;
      for (let k = 0; k < segments; k += 1) hazardPerHour[s][k] = hazard[first + k] * ratio;
    });
    if (change === null) ratePerHour.set(from[area]);
    else for (let k = 0; k < segments; k += 1) ratePerHour[k] = change.rate(from, k);
  };
  setTo(rates, ground.hazard);
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
    seed,
    segmentAt: Float64Array.from([...grid.startAt, hours[hours.length - 1]], (at) => (at - issuedAt) / 3600),
    ratePerHour,
    beds: Int32Array.from(grid.startAt, (at) => staffedBeds.findLast((step) => step.at <= at)?.beds ?? 0),
    steps: Float64Array.from(used, (count) => (sum += count / inBeds)),
    hazardPerHour,
    impatiencePerHour: bedSpace.hoursWaiting > 0 ? bedSpace.leftBeforeTreatment / bedSpace.hoursWaiting : 0,
    inBedSpaces: others,
    waiting,
    waitLimitHours,
    redraw: (replication) => {
      ground.draw(replication);
      setTo(drawnRates, ground.drawnHazard);
    },
    highest: Math.min(2000, 4 * (present + 40) + Math.ceil(Math.max(...rates[area]) * 24)),
  };
}

/** Segments of a waiting plan whose arrivals fall in a span. @param from, to hours since the outlook was issued */
export function segmentsWithin({ segmentAt }: Pick<WaitingPlan, 'segmentAt'>, from: number, to: number): number[] {
  const within: number[] = [];
  for (let k = 0; k + 1 < segmentAt.length; k += 1) {
    const middle = (segmentAt[k] + segmentAt[k + 1]) / 2;
    if (middle >= from && middle < to) within.push(k);
  }
  return within;
}

/** Waits of those who arrive in some segments. @param parts of one plan, which together hold every replication once */
export function shiftWaits(parts: readonly WaitingPart[], segments: readonly number[]): ShiftWaits {
  let [replications, arrivals, seconds, over] = [0, 0, 0, 0];
  for (const part of parts) {
    replications += part.toReplication - part.fromReplication;
    for (const k of segments) {
      arrivals += part.arrivals[k];
      seconds += part.secondsWaited[k];
      over += part.overLimit[k];
    }
  }
  if (replications === 0) throw new RangeError('no parts to finish');
  return {
    arrivals: arrivals / replications,
    meanMinutes: arrivals > 0 ? seconds / arrivals / 60 : null,
    overLimit: arrivals > 0 ? over / arrivals : null,
  };
}
