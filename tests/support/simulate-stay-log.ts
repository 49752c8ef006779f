import type { Zone } from '../../shared/domain/zoned-time.ts';
import type { VisitTable } from '../../shared/forecasting/visit-table.ts';
import { drawExponential } from '../../shared/stochastic/exponential.ts';
import { drawGamma } from '../../shared/stochastic/gamma.ts';
import { drawNormal } from '../../shared/stochastic/normal.ts';
import { makeStream } from '../../shared/stochastic/random.ts';

/** Truth that a log is drawn from. */
export interface StayLogTruth {
  zone: Zone;
  from: number;
  days: number;
  areas: {
    ratePerHour: (hourOfDay: number) => number;
    /** Shares of the four dispositions. */
    shares: [number, number, number, number];
    /** Departures an hour by disposition. */
    hazard: [number, number, number, number];
  }[];
  /** Factor on the hazard by local hour of day and whether it is a weekend. */
  hourFactor: (hourOfDay: number, weekend: boolean) => number;
  /** Day factor on the hazard, lognormal with mean 1: variance and lag-one correlation of its logarithm, for others and admitted. */
  outflow: { variance: number; correlation: number }[];
  /** Shape of the gamma law of the operational stay, mean 1; 1 is exponential. */
  stayShape: number;
  seed: number;
}

/** Draws a visit log from a known truth, hour by hour: each patient departs when ∫ μ·g·f dt reaches their drawn stay. */
export function simulateStayLog(truth: StayLogTruth): {
  visits: VisitTable;
  factors: Float64Array[];
  firstDay: number;
} {
  const { zone, from, days } = truth;
  const stream = makeStream(truth.seed, 1);
  const span = days + 20;
  const firstDay = Math.floor(zone.toLocal(from) / 86_400);
  const factors = truth.outflow.map(({ variance, correlation }) => {
    const log = Math.log1p(variance);
    let x = drawNormal(stream);
    return Float64Array.from({ length: span }, () => {
      const value = Math.exp(Math.sqrt(log) * x - log / 2);
      x = correlation * x + Math.sqrt(1 - correlation * correlation) * drawNormal(stream);
      return value;
    });
  });
  const hours = span * 24;
  const hourFactor = Float64Array.from({ length: hours }, (_, h) => {
    const local = zone.toLocal(from + h * 3600);
    const weekday = (((Math.floor(local / 86_400) + 3) % 7) + 7) % 7;
    return truth.hourFactor(Math.floor(local / 3600) % 24, weekday >= 5);
  });
  const dayOf = Int32Array.from(
    { length: hours },
    (_, h) => Math.floor(zone.toLocal(from + h * 3600) / 86_400) - firstDay,
  );
  const area: number[] = [];
  const arrivalAt: number[] = [];
  const departureAt: number[] = [];
  const disposition: number[] = [];
  truth.areas.forEach((one, a) => {
    for (let h = 0; h < days * 24; h += 1) {
      const rate = one.ratePerHour(Math.floor(zone.toLocal(from + h * 3600) / 3600) % 24);
      for (let t = drawExponential(stream) / rate; t < 1; t += drawExponential(stream) / rate) {
        let u = stream.uniform();
        let d = 0;
        while (d < 3 && u >= one.shares[d]) {
          u -= one.shares[d];
          d += 1;
        }
        const k = truth.stayShape;
        let left = k === 1 ? drawExponential(stream) : drawGamma(stream, k) / k;
        let hour = h;
        let at = t;
        for (;;) {
          const group = factors[d === 1 ? 1 : 0];
          const hazard = one.hazard[d] * hourFactor[hour] * group[dayOf[hour]];
          const room = hazard * (1 - at);
          if (left < room || hour === hours - 1) {
            at += left / hazard;
            break;
          }
          left -= room;
          hour += 1;
          at = 0;
        }
        area.push(a);
        arrivalAt.push(from + (h + t) * 3600);
        departureAt.push(from + (hour + at) * 3600);
        disposition.push(d);
      }
    }
  });
  const length = area.length;
  return {
    visits: {
      length,
      area: Uint8Array.from(area),
      arrivalAt: Float64Array.from(arrivalAt),
      bedSpaceAt: new Float64Array(length).fill(NaN),
      admissionDecisionAt: new Float64Array(length).fill(NaN),
      departureAt: Float64Array.from(departureAt),
      disposition: Uint8Array.from(disposition),
      byAmbulance: new Uint8Array(length).fill(255),
    },
    factors,
    firstDay,
  };
}
