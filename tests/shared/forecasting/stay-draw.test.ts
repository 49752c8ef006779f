import { describe, expect, it } from 'vitest';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { expectedPresent, newcomersUnderShape } from '../../../shared/forecasting/census-start.ts';
import { reportHeaping } from '../../../shared/forecasting/heaping.ts';
import { estimateOutflow, smoothOutflow } from '../../../shared/forecasting/outflow-factor.ts';
import { blockOf, holidayNumbers } from '../../../shared/forecasting/stay-clock.ts';
import { expectedStays, makeStayBuffers, makeStayDraw, staySegments } from '../../../shared/forecasting/stay-draw.ts';
import { hazardAt } from '../../../shared/forecasting/stay-shape.ts';
import type { StayShape } from '../../../shared/forecasting/stay-model.ts';
import { drawNormal } from '../../../shared/stochastic/normal.ts';
import { drawPoisson } from '../../../shared/stochastic/poisson.ts';
import { makeStream } from '../../../shared/stochastic/random.ts';
import { buildOutlookModel } from '../../support/build-outlook-model.ts';
import { expectRelative, expectWithin } from '../../support/closeness.ts';

const { stay } = buildOutlookModel();

describe('makeStayDraw', () => {
  const localHour = Array.from({ length: 72 }, (_, k) => 24 * 22_000 + k);
  const segments = staySegments(stay, localHour, (hour) => blockOf(hour, stay.blockHours, new Set()));
  const expected = expectedStays(stay, segments);
  const out = makeStayBuffers(stay, 72);
  const draw = makeStayDraw(stay, segments);
  const parameters = makeStream(1, 1);
  const path = makeStream(1, 2);
  const count = 4000;
  const sum = new Float64Array(out.hazard.length);
  const squares = new Float64Array(out.hazard.length);
  const shareSum = new Float64Array(out.shareSteps.length);
  const logs: [number, number][] = [];
  for (let r = 0; r < count; r += 1) {
    draw(parameters, path, out);
    for (let i = 0; i < sum.length; i += 1) {
      sum[i] += out.hazard[i] / count;
      squares[i] += out.hazard[i] ** 2 / count;
    }
    for (let i = 0; i < shareSum.length; i += 1) shareSum[i] += out.shareSteps[i] / count;
    // The admitted stream at the same hour of two neighbouring days.
    logs.push([Math.log(out.hazard[72 + 30]), Math.log(out.hazard[72 + 54])]);
  }

  it('has the fitted hazards and shares as means', () => {
    for (let i = 0; i < sum.length; i += 1) {
      if (sum[i] > 0) expectRelative(sum[i], expected.hazard[i], 0.05, `hazard ${i}`);
    }
    for (let i = 0; i < shareSum.length; i += 1)
      expectRelative(shareSum[i], expected.shareSteps[i], 0.02, `share ${i}`);
  });

  it('varies by day as the outflow factor does, with the correlation of neighbouring days', () => {
    const { variance, correlation } = stay.outflow.admitted;
    const relative = squares[72 + 30] / sum[72 + 30] ** 2 - 1;
    // The factor's own variance, and on top of it the errors of level, variance and hazard.
    expect(relative).toBeGreaterThan(0.9 * variance);
    expect(relative).toBeLessThan(2.2 * variance);
    const mean = [0, 1].map((d) => logs.reduce((total, pair) => total + pair[d], 0) / count);
    const covariance = logs.reduce((total, pair) => total + (pair[0] - mean[0]) * (pair[1] - mean[1]), 0) / count;
    const spread = logs.reduce((total, pair) => total + (pair[0] - mean[0]) ** 2, 0) / count;
    expectWithin(covariance / spread, correlation, 0.15, 'correlation');
  });
});

describe('estimateOutflow', () => {
  const days = 4000;
  const stream = makeStream(3, 1);
  const sd = Math.sqrt(Math.log1p(0.05));
  let x = drawNormal(stream);
  const factor = Float64Array.from({ length: days }, () => {
    const value = Math.exp(sd * x - (sd * sd) / 2);
    x = 0.7 * x + Math.sqrt(1 - 0.49) * drawNormal(stream);
    return value;
  });
  const daily = {
    day: Int32Array.from(factor, (_, d) => d),
    departures: Float64Array.from(factor, (value) => drawPoisson(stream, 60 * value)),
    expected: new Float64Array(days).fill(60),
  };
  const found = estimateOutflow(daily);

  it('finds variance and correlation within three of its own standard errors', () => {
    expectWithin(found.variance, 0.05, 3 * found.varianceSe, 'variance');
    expectWithin(found.correlation, 0.7, 3 * found.correlationSe, 'correlation');
    expect(found.varianceSe).toBeLessThan(0.01);
  });

  it('smooths nearer to the true factor than the daily ratio lies', () => {
    const smooth = smoothOutflow(daily, found);
    const error = (values: ArrayLike<number>): number =>
      factor.reduce((total, value, d) => total + (values[d] - value) ** 2, 0) / days;
    const raw = daily.departures.map((count) => count / 60);
    expect(error(smooth)).toBeLessThan(0.65 * error(raw));
  });

  it('says none of a few days or of calm ones', () => {
    expect(
      estimateOutflow({ day: new Int32Array(5), departures: new Float64Array(5), expected: new Float64Array(5) }),
    ).toEqual({ variance: 0, varianceSe: 0, correlation: 0, correlationSe: 0, levelSe: 0, days: 5 });
  });
});

describe('expectedPresent', () => {
  const hours = new Float64Array(96).fill(1);
  const past = { hours, ratePerHour: [hours.map(() => 4)], hazardPerHour: [hours.map(() => 0.25)] };

  // Source: Little's law, L = λ·W (Little 1961), and the memory-less exponential.
  it('is λ·W at rest, whatever the shape, and the exponential keeps no memory', () => {
    expectRelative(expectedPresent(past, [null]).means[0], 16, 1e-9, 'exponential');
    // Stays uniform on 0..2 means: cumulative hazard −ln(1 − x/2), mean 1.
    const uniform: StayShape = {
      step: 1 / 16,
      stays: Array.from({ length: 129 }, (_, i) => 2 * -Math.expm1(-i / 16)),
      tail: 0.001,
    };
    const { means, remaining } = expectedPresent(past, [uniform]);
    expectRelative(means[0], 16, 0.005, 'uniform');
    // What remains of a stay seen at rest has density S(x)/W (Cox 1962): P(R > x) = (1 − x/2)².
    for (const x of [0.25, 0.5, 1, 1.5]) {
      expectWithin(Math.exp(-hazardAt(remaining[0], x)), (1 - x / 2) ** 2, 0.01, `remaining ${x}`);
    }
    const fresh = newcomersUnderShape(hours, past.ratePerHour[0], past.hazardPerHour[0], uniform);
    expectRelative(fresh[95], 16, 0.005, 'newcomers after long');
  });
});

describe('reportHeaping', () => {
  it('finds times typed at full hours and closed at 23:59, and nothing in even ones', () => {
    const zone = makeZone('Asia/Kolkata');
    const midnight = Date.UTC(2030, 0, 1) / 1000 - 19_800;
    const even = Float64Array.from({ length: 28_800 }, (_, i) => midnight + i * 60);
    const table = (departureAt: Float64Array) => ({
      length: departureAt.length,
      area: new Uint8Array(departureAt.length),
      arrivalAt: departureAt,
      bedSpaceAt: departureAt,
      admissionDecisionAt: departureAt,
      departureAt,
      disposition: new Uint8Array(departureAt.length),
      byAmbulance: new Uint8Array(departureAt.length),
    });
    const calm = reportHeaping(table(even), zone);
    expect(calm.departuresOnTheHour).toBeCloseTo(1 / 60, 10);
    expect(calm.strongest).toEqual([]);
    const heaped = even.map((at, i) =>
      i % 10 === 0 ? Math.floor((at - midnight) / 86_400) * 86_400 + midnight + 86_340 : at,
    );
    const found = reportHeaping(table(heaped), zone);
    expect(found.strongest[0].minuteOfDay).toBe(1439);
    expect(found.departuresAt2359).toBeGreaterThan(0.1);
  });
});

describe('blocks of the day', () => {
  it('takes Saturdays, Sundays and holidays apart', () => {
    const holidays = holidayNumbers(['2030-01-01']);
    const day = (date: string): number => Math.floor(Date.parse(`${date}T00:00Z`) / 3_600_000);
    // 2030-01-01 is a Tuesday, 2030-01-05 a Saturday.
    expect(blockOf(day('2030-01-02') + 5, 2, holidays)).toBe(2);
    expect(blockOf(day('2030-01-01') + 5, 2, holidays)).toBe(14);
    expect(blockOf(day('2030-01-05') + 23, 2, holidays)).toBe(23);
    expect(blockOf(day('2030-01-06'), 2, holidays)).toBe(12);
    expect(blockOf(day('2030-01-07'), 2, holidays)).toBe(0);
  });
});
