import { hourOfWeek } from '../../shared/domain/hour-of-week.ts';
import type { Zone } from '../../shared/domain/zoned-time.ts';
import type { VisitTable } from '../../shared/forecasting/visit-table.ts';
import { drawExponential } from '../../shared/stochastic/exponential.ts';
import { drawGamma } from '../../shared/stochastic/gamma.ts';
import { drawNormal } from '../../shared/stochastic/normal.ts';
import { makeStream } from '../../shared/stochastic/random.ts';
import type { RandomStream } from '../../shared/stochastic/random.ts';

/** A factor by day: lognormal of mean 1, its logarithm an AR(1). */
export interface DayFactor {
  variance: number;
  correlation: number;
}

export interface NeedLogArea {
  /** Arrivals an hour by hour of the week, 168 of them. */
  ratePerHour: readonly number[];
  /** Shares of home, admitted, transferred and left before treatment by block of four hours. */
  shares: readonly (readonly [number, number, number, number])[];
  /** Mean stay by disposition where g and f are 1, hours. */
  meanStay: readonly [number, number, number, number];
  /** Shape of the gamma law of the stay by disposition; 1 is exponential. */
  shape: readonly [number, number, number, number];
  /** Of the admitted patients' shape, the part after the admission decision. */
  boardingShape: number;
}

/** The truth that a log is drawn from. */
export interface NeedLogTruth {
  zone: Zone;
  /** A local midnight, UTC seconds. */
  from: number;
  days: number;
  areas: readonly NeedLogArea[];
  /** g by local hour: others and admitted, weekdays and weekends. */
  pace: (admitted: boolean, hourOfDay: number, weekend: boolean) => number;
  /** Factor on the arrivals of every area, days from midnight. */
  arrivalFactor: DayFactor;
  /** f, days from 04:00: everyone but the admitted, and the admitted. */
  outflow: readonly [others: DayFactor, admitted: DayFactor];
  seed: number;
}

function dayFactors(stream: RandomStream, { variance, correlation }: DayFactor, days: number): Float64Array {
  const log = Math.log1p(variance);
  let x = drawNormal(stream);
  return Float64Array.from({ length: days }, () => {
    const value = Math.exp(Math.sqrt(log) * x - log / 2);
    x = correlation * x + Math.sqrt(1 - correlation * correlation) * drawNormal(stream);
    return value;
  });
}

/**
 * A visit log in which all that the forecast of need assumes is true and known: arrivals Poisson by hour of the week
 * under a day factor of all areas, dispositions by block of the day, and stays gamma in operational time ∫ g·f dt, with g by
 * hour and f autoregressive by day. An admitted patient's stay is a gamma time to the decision and a gamma time of
 * boarding, both in operational time: their sum is gamma again. Nothing depends on how many patients are there.
 */
export function simulateNeedLog(truth: NeedLogTruth): VisitTable {
  const { zone, from, days, areas } = truth;
  const stream = makeStream(truth.seed, 31);
  // Room for the last stays to end in.
  const span = days + 20;
  const hours = span * 24;
  const firstDay = Math.floor(zone.toLocal(from) / 86_400);
  const arrivalFactor = dayFactors(stream, truth.arrivalFactor, span + 1);
  const outflow = truth.outflow.map((factor) => dayFactors(stream, factor, span + 2));
  const localHour = Int32Array.from({ length: hours }, (_, h) => Math.floor(zone.toLocal(from + h * 3600) / 3600));
  // Operational time at the start of every hour, for the others and the admitted.
  const clocks = [false, true].map((admitted, group) => {
    const clock = new Float64Array(hours + 1);
    for (let h = 0; h < hours; h += 1) {
      const day = Math.floor((localHour[h] - 4) / 24) - firstDay + 1;
      const g = truth.pace(admitted, localHour[h] % 24, hourOfWeek(localHour[h]) >= 120);
      clock[h + 1] = clock[h] + g * outflow[group][day];
    }
    return clock;
  });
  /** The instant, in hours, at which `stay` hours of operational time have gone by since hour `at`. */
  const walk = (clock: Float64Array, at: number, stay: number): number => {
    let h = Math.floor(at);
    const target = clock[h] + (at - h) * (clock[h + 1] - clock[h]) + stay;
    while (h < hours - 1 && clock[h + 1] <= target) h += 1;
    return h + (target - clock[h]) / (clock[h + 1] - clock[h]);
  };
  const columns = { area: [] as number[], arrivalAt: [] as number[], decisionAt: [] as number[] };
  const ends = { departureAt: [] as number[], disposition: [] as number[] };
  areas.forEach((area, a) => {
    for (let h = 0; h < days * 24; h += 1) {
      const factor = arrivalFactor[Math.floor(localHour[h] / 24) - firstDay];
      const rate = area.ratePerHour[hourOfWeek(localHour[h])] * factor;
      const shares = area.shares[Math.floor((localHour[h] % 24) / 4)];
      for (let t = drawExponential(stream) / rate; t < 1; t += drawExponential(stream) / rate) {
        let u = stream.uniform();
        let d = 0;
        while (d < 3 && u >= shares[d]) {
          u -= shares[d];
          d += 1;
        }
        const scale = area.meanStay[d] / area.shape[d];
        let decided = NaN;
        let left: number;
        if (d === 1) {
          decided = walk(clocks[1], h + t, scale * drawGamma(stream, area.shape[d] - area.boardingShape));
          left = walk(clocks[1], decided, scale * drawGamma(stream, area.boardingShape));
        } else left = walk(clocks[0], h + t, scale * drawGamma(stream, area.shape[d]));
        columns.area.push(a);
        columns.arrivalAt.push(from + (h + t) * 3600);
        columns.decisionAt.push(from + decided * 3600);
        ends.departureAt.push(from + left * 3600);
        ends.disposition.push(d);
      }
    }
  });
  const length = columns.area.length;
  return {
    length,
    area: Uint8Array.from(columns.area),
    arrivalAt: Float64Array.from(columns.arrivalAt),
    bedSpaceAt: new Float64Array(length).fill(NaN),
    admissionDecisionAt: Float64Array.from(columns.decisionAt),
    departureAt: Float64Array.from(ends.departureAt),
    disposition: Uint8Array.from(ends.disposition),
    byAmbulance: new Uint8Array(length).fill(255),
  };
}
