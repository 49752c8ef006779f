import { describe, expect, it } from 'vitest';
import { exactNeed } from '../../../shared/forecasting/exact-need.ts';
import { lognormalNodes } from '../../../shared/forecasting/factor-nodes.ts';
import { gammaPoissonPmf } from '../../../shared/stochastic/gamma-poisson.ts';
import { pmfExceedance, pmfMean, pmfQuantile, pmfVariance } from '../../../shared/stochastic/pmf.ts';
import { poissonPmf } from '../../../shared/stochastic/poisson.ts';
import reference from '../../reference/patients-over-time.json' with { type: 'json' };
import { expectRelative, expectWithin } from '../../support/closeness.ts';

const { piecewise, sinusoid } = reference;

/** Mean present at the end of [0, until] under λ(t) = lb·(1 + β·sin(g·t)), by pieces that carry its exact averages. */
function meanByPieces(one: (typeof sinusoid.cases)[number], start: number, until: number, pieces: number): number {
  const width = until / pieces;
  const integral = (t: number): number => one.lb * (t - (one.beta / one.g) * Math.cos(one.g * t));
  const law = exactNeed({
    hours: new Float64Array(pieces).fill(width),
    streams: [
      {
        ratePerHour: Float64Array.from(
          { length: pieces },
          (_, i) => (integral((i + 1) * width) - integral(i * width)) / width,
        ),
        hazardPerHour: new Float64Array(pieces).fill(one.mu),
      },
    ],
    present: [],
    startMeans: [start],
    onlyLast: true,
  });
  return pmfMean(law[0]);
}

describe('exactNeed', () => {
  // Source: closed form of Eick, Massey & Whitt (1993), Management Science 39, 241, evaluated in mpmath and checked by an ODE solver.
  it('has the mean of M_t/M/∞ with a sinusoidal rate (5 cases, from 12 patients and at rest)', () => {
    for (const one of sinusoid.cases) {
      one.t.forEach((t, i) => {
        if (t === 0) return;
        // Pieces of constant rate leave an error in even powers of their width; Richardson's step removes the first two.
        const extrapolated = (start: number): number => {
          const [a, b, c] = [256, 512, 1024].map((pieces) => meanByPieces(one, start, t, pieces));
          const first = b + (b - a) / 3;
          const second = c + (c - b) / 3;
          return second + (second - first) / 15;
        };
        expectRelative(extrapolated(12), one.m_from_12[i], 1e-9, `lb ${one.lb}, t ${t}, from 12`);
        expectRelative(extrapolated(one.m_periodic[0]), one.m_periodic[i], 1e-9, `lb ${one.lb}, t ${t}, at rest`);
      });
    }
  });

  // Source: SciPy and R, in patients-over-time.json: binomial survivors and Poisson newcomers, 24 hourly rates.
  it('gives the whole distribution from 12 patients counted, hour by hour', () => {
    const laws = exactNeed({
      hours: piecewise.rates.map(() => 1),
      streams: [{ ratePerHour: piecewise.rates, hazardPerHour: piecewise.rates.map(() => piecewise.mu) }],
      present: [{ patients: piecewise.n0, shares: [1] }],
    });
    for (let hour = 1; hour <= 24; hour += 1) {
      expectRelative(pmfMean(laws[hour - 1]), piecewise.mean_at_hour_boundaries[hour], 1e-9, `mean at ${hour}`);
      expectRelative(pmfVariance(laws[hour - 1]), piecewise.var_at_hour_boundaries[hour], 1e-9, `variance at ${hour}`);
    }
    for (const [hour, pmf] of Object.entries(piecewise.pmf)) {
      const law = laws[Number(hour) - 1];
      pmf.forEach((chance, n) => expectWithin(law[n] ?? 0, chance, 1e-12, `P(N = ${n}) at ${hour}`));
    }
  });

  it('adds streams: two halves of one stream are that stream, whichever way the present are shared', () => {
    const hazardPerHour = piecewise.rates.map(() => piecewise.mu);
    const hours = piecewise.rates.map(() => 1);
    const whole = exactNeed({
      hours,
      streams: [{ ratePerHour: piecewise.rates, hazardPerHour }],
      present: [{ patients: 12, shares: [1] }],
    });
    const halves = exactNeed({
      hours,
      streams: [0.3, 0.7].map((share) => ({ ratePerHour: piecewise.rates.map((rate) => share * rate), hazardPerHour })),
      present: [
        { patients: 5, shares: [0.5, 0.5] },
        { patients: 7, shares: [0, 1] },
      ],
    });
    whole.forEach((law, k) => law.forEach((chance, n) => expectWithin(halves[k][n] ?? 0, chance, 1e-12, `${k}, ${n}`)));
  });

  // Source: the gamma mixture of Poisson laws is the negative binomial (Greenwood & Yule 1920).
  it('integrates a gamma arrival factor in closed form', () => {
    const [law] = exactNeed({
      hours: [400],
      streams: [{ ratePerHour: [5], hazardPerHour: [0.2] }],
      present: [],
      arrivalVariance: 0.04,
    });
    for (let n = 0; n < 60; n += 1) expectWithin(law[n], gammaPoissonPmf(n, 25, 0.04), 1e-12, `P(N = ${n})`);
  });

  it('mixes over the nodes of an outflow factor', () => {
    const nodes = lognormalNodes(0.09, 3);
    const [law] = exactNeed({
      hours: [400],
      streams: [{ ratePerHour: [5], hazardPerHour: [0.2] }],
      present: [],
      outflowFactor: nodes,
    });
    for (let n = 0; n < 70; n += 1) {
      const expected = nodes.reduce((sum, node) => sum + node.weight * poissonPmf(n, 25 / node.value), 0);
      expectWithin(law[n], expected, 1e-12, `P(N = ${n})`);
    }
  });

  it('survives the ends: nobody, no departures, huge rates, a zero-length segment', () => {
    const empty = exactNeed({ hours: [1], streams: [{ ratePerHour: [0], hazardPerHour: [0] }], present: [] });
    expect(empty).toEqual([Float64Array.of(1)]);
    const kept = exactNeed({
      hours: [0, 5],
      streams: [{ ratePerHour: [3, 0], hazardPerHour: [1, 0] }],
      present: [{ patients: 7, shares: [1] }],
    });
    expect(kept.map((law) => pmfQuantile(law, 0.5))).toEqual([7, 7]);
    const [huge] = exactNeed({ hours: [1], streams: [{ ratePerHour: [9e5], hazardPerHour: [1e-3] }], present: [] });
    expectRelative(pmfMean(huge), 9e5 * (-Math.expm1(-1e-3) / 1e-3), 1e-9, 'huge mean');
    expect(pmfExceedance(huge, 1e6)).toBe(0);
  });

  it('refuses bad input by name', () => {
    const good = { hours: [1], streams: [{ ratePerHour: [1], hazardPerHour: [1] }], present: [] };
    expect(() => exactNeed({ ...good, hours: [NaN] })).toThrow(/hours\[0\]/);
    expect(() => exactNeed({ ...good, streams: [{ ratePerHour: [-1], hazardPerHour: [1] }] })).toThrow(/ratePerHour/);
    expect(() => exactNeed({ ...good, streams: [{ ratePerHour: [1], hazardPerHour: [NaN] }] })).toThrow(/hazardPer/);
    expect(() => exactNeed({ ...good, present: [{ patients: 1.5, shares: [1] }] })).toThrow(/present\[0\]/);
    expect(() => exactNeed({ ...good, present: [{ patients: 1, shares: [1.5] }] })).toThrow(/shares/);
    expect(() => lognormalNodes(-1, 3)).toThrow(/variance/);
  });
});
