import { describe, expect, it } from 'vitest';
import { collectStays, tallyStays } from '../../../shared/forecasting/collect-stays.ts';
import { cutBlocks } from '../../../shared/forecasting/stay-clock.ts';
import { makeStayBuffers, makeStayDraw } from '../../../shared/forecasting/stay-draw.ts';
import { expectedShares, streamsPerArea } from '../../../shared/forecasting/stay-model.ts';
import { makeStream } from '../../../shared/stochastic/random.ts';
import { expectRelative, expectWithin } from '../../support/closeness.ts';
import { fitReferenceLog } from '../../support/fit-reference-log.ts';
import { readReference } from '../../support/read-reference-log.ts';

// Length of stay of the reference log against make-expected.py (NumPy, SciPy, zoneinfo; minute by minute) and truth.json.

interface Expected {
  streams: {
    visits: number;
    censored: number;
    departures: number;
    hoursAtRisk: number;
    departuresPerHour: number;
    limits: [low: number, high: number];
    blockDepartures: number[];
    blockHoursAtRisk: number[];
  }[];
  shareBeforeDecision: number[];
  shareCounts: number[][][];
}

const expected = readReference('expected.json') as Expected;
const { truth, table, zone, gaps, stay } = fitReferenceLog();
const areas = truth.areas.map((_, area) => area);
const cap = 72 * 3600;

describe('length of stay', () => {
  it('departures per hour at risk equal the censored maximum likelihood, with its χ² limits', () => {
    stay.streams.forEach((stream, index) => {
      const reference = expected.streams[index];
      const label = `stream ${index}`;
      expect([stream.visits, stream.censored, stream.departures], label).toEqual([
        reference.visits,
        reference.censored,
        reference.departures,
      ]);
      expectRelative(stream.hoursAtRisk, reference.hoursAtRisk, 1e-9, label);
      expectRelative(stream.departuresPerHour ?? NaN, reference.departuresPerHour, 1e-9, label);
      stream.limits?.forEach((limit, k) => {
        expectRelative(limit, reference.limits[k], 1e-6, label);
      });
      // What need is drawn from is held to the site's hazard by the weight of one departure, and days of slow outflow are
      // weighed: it stays within one standard error of the maximum likelihood.
      const posterior = stream.hazard.shape / stream.hazard.rate;
      expectRelative(posterior, reference.departuresPerHour, 1 / Math.sqrt(reference.departures), label);
    });
    expect(expected.streams.reduce((sum, { censored }) => sum + censored, 0)).toBeGreaterThan(0);
    stay.shareBeforeDecision.forEach((share, area) => {
      expectRelative(share ?? NaN, expected.shareBeforeDecision[area], 1e-9, truth.areas[area]);
    });
  });

  it('departures and time at risk by block of the day, and dispositions, are equal', () => {
    const from = truth.from;
    const to = truth.to - cap;
    const stays = collectStays({
      visits: table,
      areas: areas.length,
      zone,
      from,
      to,
      capHours: 72,
      shareBlockHours: 4,
      facts: { selectedBy: 'arrived', takenAt: truth.takenAt, missingDeparture: 'still present' },
      gaps,
    });
    const cells = cutBlocks(zone, from, to + cap + 1, 2, new Set());
    const tallies = tallyStays(stays, cells, 2, areas.length * streamsPerArea);
    expected.streams.forEach((reference, index) => {
      const departures = new Float64Array(24);
      const hours = new Float64Array(24);
      cells.block.forEach((block, cell) => {
        departures[block] += tallies.departures[index][cell];
        hours[block] += tallies.hoursAtRisk[index][cell];
      });
      expect(Array.from(departures)).toEqual(reference.blockDepartures);
      expect(stay.streams[index].blockDepartures).toEqual(reference.blockDepartures);
      hours.forEach((value, block) => {
        expectRelative(value, reference.blockHoursAtRisk[block], 1e-9, `stream ${index}, block ${block}`);
        // The fit weighs them by the day's outflow, which this process does not vary but the fit must estimate.
        expectRelative(stay.streams[index].blockHoursAtRisk[block], reference.blockHoursAtRisk[block], 0.04, 'weighed');
      });
    });
    stays.arrivalsByBlock.forEach((found, area) => {
      expect(Array.from(found)).toEqual(expected.shareCounts[area].flat());
    });
    const { others, admitted } = stay.outflow;
    expect(others.variance).toBeLessThan(2 * others.varianceSe);
    expect(admitted.variance).toBeLessThan(2 * admitted.varianceSe);
  });

  it('fitted hazards lie within their own error of the true ones', () => {
    // The streams whose stay is exponential by the process; the admitted stay is a decision and then boarding.
    const names = ['home', null, 'transferred', 'left', 'boarding'] as const;
    // Their posterior by 1,000 joint draws, the same that a simulation makes.
    const still = { ...stay.outflow.others, variance: 0, varianceSe: 0 };
    const blocks = Uint8Array.from({ length: 24 }, (_, block) => block);
    const segments = { block: blocks, shareBlock: new Uint8Array(24), day: new Int32Array(24) };
    const certainOutflow = { ...stay, outflow: { others: still, admitted: still } };
    const draw = makeStayDraw(certainOutflow, segments);
    const out = makeStayBuffers(stay, 24);
    const random = makeStream(5);
    const drawn = Array.from({ length: 1000 }, () => {
      draw(random, random, out);
      return out.hazard.map(Math.log);
    });
    const z: number[] = [];
    stay.streams.forEach((stream, index) => {
      const name = names[index % streamsPerArea];
      if (name === null) return;
      blocks.forEach((block) => {
        const logs = drawn.map((hazards) => hazards[index * 24 + block]);
        const mean = logs.reduce((sum, value) => sum + value, 0) / logs.length;
        const variance = logs.reduce((sum, value) => sum + (value - mean) ** 2, 0) / logs.length;
        z.push((mean - Math.log(truth.hazardPerHour[stream.area][name][block])) / Math.sqrt(variance));
      });
    });
    const within = z.filter((value) => Math.abs(value) < 1.959964).length / z.length;
    expect(within).toBeGreaterThanOrEqual(0.9);
    expect(within).toBeLessThanOrEqual(0.99);
    expect(z.reduce((sum, value) => sum + value * value, 0) / z.length).toBeLessThan(1.5);
  });

  it('disposition shares lie, split by split, between the block’s own and the area’s, and near the true ones', () => {
    // Left before treatment or not; of those who stay admitted or not; of the rest transferred or home.
    const splits: [yes: number, of: number[]][] = [
      [3, [0, 1, 2, 3]],
      [1, [0, 1, 2]],
      [2, [0, 2]],
    ];
    const share = (row: readonly number[], [yes, of]: [number, number[]]): number =>
      row[yes] / of.reduce((sum, d) => sum + row[d], 0);
    stay.shares.forEach((shares, area) => {
      const counts = expected.shareCounts[area];
      const visits = counts.map((block) => block.reduce((sum, n) => sum + n, 0));
      const all = visits.reduce((sum, n) => sum + n, 0);
      const fitted = expectedShares(shares);
      const whole = [0, 1, 2, 3].map((d) => counts.reduce((sum, block) => sum + block[d], 0));
      for (const split of splits) {
        const overall = share(whole, split);
        fitted.forEach((block, b) => {
          const own = share(counts[b], split);
          const label = `${truth.areas[area]}, block ${b}, disposition ${split[0]}`;
          // The area's shares are themselves held to the site's by four visits.
          expect(share(block, split), label).toBeGreaterThan(Math.min(own, overall) - 0.002);
          expect(share(block, split), label).toBeLessThan(Math.max(own, overall) + 0.002);
        });
      }
      [0, 1, 2, 3].forEach((d) => {
        fitted.forEach((block, b) => {
          // Three standard errors of the block's own count.
          const real = truth.shares[area][b][d];
          const margin = 3 * Math.sqrt((real * (1 - real)) / visits[b]);
          expectWithin(block[d], real, margin, `${truth.areas[area]}, block ${b}, disposition ${d}`);
        });
        // Over the whole day nothing is shrunk: within four standard errors of what the process means.
        const real = truth.shares[area].reduce((sum, block, b) => sum + (block[d] * visits[b]) / all, 0);
        const mean = fitted.reduce((sum, block, b) => sum + (block[d] * visits[b]) / all, 0);
        expectWithin(mean, real, 4 * Math.sqrt((real * (1 - real)) / all), `${truth.areas[area]}, disposition ${d}`);
      });
    });
  });
});
