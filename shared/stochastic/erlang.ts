import { checkCount, checkLevel, checkNonNegative, checkPositive, checkPositiveCount } from './check.ts';

/**
 * Erlang's loss formula: the chance that all servers are busy when those who find no server leave, with offered load
 * a = arrival rate × mean service. Recursion B(0) = 1, B(c) = a B(c − 1) / (c + a B(c − 1)) (Erlang 1917), stable for
 * any number of servers. @throws RangeError naming the bad argument. Cost: O(servers).
 */
export function erlangB(servers: number, offered: number): number {
  checkCount('servers', servers);
  checkNonNegative('offered', offered);
  let blocked = 1;
  for (let c = 1; c <= servers; c += 1) blocked = (offered * blocked) / (c + offered * blocked);
  return blocked;
}

/**
 * Erlang's delay formula: the chance of having to wait when those who find no server queue (M/M/c),
 * C = B / (1 − ρ (1 − B)), ρ = offered / servers. 1 when offered ≥ servers: the queue then grows without end.
 */
export function erlangC(servers: number, offered: number): number {
  if (offered >= servers && offered > 0) {
    checkCount('servers', servers);
    checkNonNegative('offered', offered);
    return 1;
  }
  checkPositiveCount('servers', servers);
  const blocked = erlangB(servers, offered);
  const utilisation = offered / servers;
  return blocked / (1 - utilisation * (1 - blocked));
}

/** The smallest number of servers with Erlang C at most `risk`. @throws RangeError on a bad load or risk. */
export function serversForDelay(offered: number, risk: number): number {
  checkNonNegative('offered', offered);
  checkLevel('risk', risk);
  let blocked = 1;
  for (let c = 1; ; c += 1) {
    blocked = (offered * blocked) / (c + offered * blocked);
    if (offered < c && blocked / (1 - (offered / c) * (1 - blocked)) <= risk) return c;
  }
}

/** An M/M/c queue at rest. Times in the unit of the rates. */
export interface MmcMeasures {
  /** arrival rate / (servers × service rate). */
  utilisation: number;
  /** P(N = 0). */
  idle: number;
  /** Chance of waiting, Erlang C. */
  delay: number;
  /** Mean number waiting. */
  meanWaiting: number;
  /** Mean number present, those in service included. */
  meanPresent: number;
  /** Mean wait over all. */
  meanWait: number;
  /** Mean time from arrival to departure. */
  meanTime: number;
  /** Chance that the wait is longer than t. */
  waitExceedance(t: number): number;
}

/** @throws RangeError unless arrivalRate < servers × serviceRate: otherwise nothing settles. */
function checkStable(arrivalRate: number, serviceRate: number, servers: number): void {
  checkPositive('arrivalRate', arrivalRate);
  checkPositive('serviceRate', serviceRate);
  checkPositiveCount('servers', servers);
  if (arrivalRate >= servers * serviceRate) {
    throw new RangeError(`arrivalRate must be below servers × serviceRate, got ${arrivalRate}`);
  }
}

/** Means and chances of an M/M/c queue at rest, from Erlang C. @throws RangeError on bad or unstable rates. */
export function mmcMeasures(arrivalRate: number, serviceRate: number, servers: number): MmcMeasures {
  checkStable(arrivalRate, serviceRate, servers);
  const offered = arrivalRate / serviceRate;
  const delay = erlangC(servers, offered);
  const spare = servers * serviceRate - arrivalRate;
  const meanWait = delay / spare;
  return {
    utilisation: offered / servers,
    idle: mmcStationary(arrivalRate, serviceRate, servers, 0)[0],
    delay,
    meanWaiting: arrivalRate * meanWait,
    meanPresent: arrivalRate * meanWait + offered,
    meanWait,
    meanTime: meanWait + 1 / serviceRate,
    waitExceedance(t) {
      checkNonNegative('t', t);
      return delay * Math.exp(-spare * t);
    },
  };
}

/**
 * The stationary law of the number present in an M/M/c queue: P(N = n) for n = 0 .. upTo. Built from P(N = c) =
 * C (1 − ρ) outwards by the balance λ P(n) = min(n + 1, c) μ P(n + 1), so that nothing over- or underflows on the way
 * to a usable answer. @throws RangeError on bad or unstable rates. Cost: O(servers + upTo).
 */
export function mmcStationary(arrivalRate: number, serviceRate: number, servers: number, upTo: number): Float64Array {
  checkStable(arrivalRate, serviceRate, servers);
  checkCount('upTo', upTo);
  const offered = arrivalRate / serviceRate;
  const utilisation = offered / servers;
  const pmf = new Float64Array(Math.max(upTo, servers) + 1);
  pmf[servers] = erlangC(servers, offered) * (1 - utilisation);
  for (let n = servers; n > 0; n -= 1) pmf[n - 1] = (pmf[n] * n) / offered;
  for (let n = servers; n < upTo; n += 1) pmf[n + 1] = pmf[n] * utilisation;
  return pmf.slice(0, upTo + 1);
}
