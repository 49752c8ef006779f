import { gammaPoissonQuantile } from '../stochastic/gamma-poisson.ts';
import type { LiveArrivals } from './arrival-model.ts';
import { finishOutlook } from './finish-outlook.ts';
import type { OutlookInput, OutlookResult } from './outlook-types.ts';
import { prepareNeed } from './prepare-need.ts';
import type { OutlookModel, PreparedNeed } from './prepare-need.ts';
import type { NeedPart } from './need-part.ts';
import { expectedRates } from './rate-draws.ts';
import { makeRateGrid } from './rate-grid.ts';
import { simulateNeedPart } from './simulate-need.ts';
import { withCalendar } from './with-calendar.ts';
import { makeZone } from '../domain/zoned-time.ts';

/** What the parts of an outlook and its end stand on; made once a thread. */
export interface PreparedOutlook extends PreparedNeed {
  input: OutlookInput;
  arrivalsSoFar: OutlookResult['arrivalsSoFar'];
}

/** Makes ready for the replications of an outlook. @throws RangeError naming a bad input. Cost: a few ms. */
export function prepareOutlook(model: OutlookModel, input: OutlookInput): PreparedOutlook {
  const prepared = prepareNeed(model, input);
  return { ...prepared, input, arrivalsSoFar: arrivalsSoFar(model, input, prepared.live) };
}

/** One thread's share of an outlook: replications [from, to). The parts of any split add up to the same result. */
export function simulateOutlookPart(prepared: PreparedOutlook, from: number, to: number): NeedPart {
  return simulateNeedPart(prepared.plan, from, to);
}

/** The outlook from its parts: see `finishOutlook`. */
export function outlookFromParts(prepared: PreparedOutlook, parts: readonly NeedPart[]): OutlookResult {
  return finishOutlook(prepared.input, prepared, parts, prepared.arrivalsSoFar);
}

/**
 * An outlook on one thread: need by hour and area with percentiles, chances of shortfall, beds needed and remedies, from
 * fitted models, the census and the plan. The same input and engine version give the same digits.
 * @throws RangeError naming a bad input. Cost: about 50 µs a replication of 5 areas × 36 hours.
 */
export function issueOutlook(model: OutlookModel, input: OutlookInput): OutlookResult {
  const prepared = prepareOutlook(model, input);
  return outlookFromParts(prepared, [simulateOutlookPart(prepared, 0, input.replications)]);
}

/** "Tonight" of the line that says what a count of arrivals does to the forecast. */
const movedSeconds = 12 * 3600;

/** How the arrivals counted so far compare with what the model expected before it knew them, and what they do to the hours ahead. */
function arrivalsSoFar(
  model: OutlookModel,
  input: OutlookInput,
  live: LiveArrivals | null,
): OutlookResult['arrivalsSoFar'] {
  const since = input.arrivalsSince;
  if (since === null || !(since.to > since.from)) return null;
  const grid = makeRateGrid(makeZone(input.timeZone), since.from, since.to);
  const { arrival, calendar } = withCalendar(model, input);
  const rates = expectedRates(arrival, grid, calendar);
  const expected = rates.reduce((sum, rate) => rate.reduce((all, value, k) => all + value * grid.hours[k], sum), 0);
  if (!(expected > 0)) return null;
  const variance = Math.expm1(model.arrival.factorVariance);
  const ahead = makeRateGrid(makeZone(input.timeZone), input.issuedAt, input.issuedAt + movedSeconds);
  const sum = (given?: LiveArrivals) =>
    expectedRates(arrival, ahead, calendar, given).reduce(
      (all, rate) => rate.reduce((part, value, k) => part + value * ahead.hours[k], all),
      0,
    );
  return {
    counted: since.count,
    expected,
    p10: gammaPoissonQuantile(0.1, expected, variance),
    p90: gammaPoissonQuantile(0.9, expected, variance),
    factor: since.count / expected,
    ...(live ? { move: sum(live) / sum() } : {}),
  };
}
