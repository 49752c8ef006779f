import { describe, expect, test } from 'vitest';
import { outlookFromParts, prepareOutlook, simulateOutlookPart } from '../../../shared/forecasting/issue-outlook.ts';
import { makeLogTruth } from '../../../shared/forecasting/log-truth.ts';
import { forecastOfLaw, outlookLaws, type IssuedLaw } from '../../../shared/forecasting/outlook-laws.ts';
import { makePastBaselines } from '../../../shared/forecasting/past-baselines.ts';
import type { VisitTable } from '../../../shared/forecasting/visit-table.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { buildOutlookInput, buildOutlookModel, logTo } from '../../support/build-outlook-model.ts';

describe('the distributions kept with an outlook', () => {
  const model = buildOutlookModel();
  const input = buildOutlookInput();
  const prepared = prepareOutlook(model, input);
  const parts = [simulateOutlookPart(prepared, 0, 600), simulateOutlookPart(prepared, 600, 1000)];
  const result = outlookFromParts(prepared, parts);
  const laws = outlookLaws(prepared, parts, result, model);
  const find = (measure: IssuedLaw['measure'], areaId: string | null, leadHours = 0) =>
    laws.find((law) => law.measure === measure && law.areaId === areaId && law.leadHours === leadHours);

  test('say at each lead what the outlook said', () => {
    for (const leadHours of [1, 4, 12, 24]) {
      const law = find('need', 'acute', leadHours);
      const h = input.hours.indexOf(law?.from ?? 0);
      expect(Math.abs(input.hours[h] - input.issuedAt - leadHours * 3600)).toBeLessThanOrEqual(1800);
      expect(law?.chance).toBe(result.areas[0].shortfall[h].chance);
      const forecast = forecastOfLaw(law?.law ?? { means: [0] });
      // The kept law is the histogram of the replications, smoothed by ten of a thousand.
      expect(Math.abs(forecast.quantile(0.5) - result.areas[0].need.p50[h])).toBeLessThanOrEqual(1);
      expect(Math.abs(forecast.mean - result.areas[0].need.mean[h])).toBeLessThan(1e-9);
    }
    // The small area printed the chance of any shortfall within the hour.
    const small = find('need', 'resuscitation', 4);
    const h = input.hours.indexOf(small?.from ?? 0);
    expect(small?.chance).toBe(result.areas[1].shortfallWithin[h].chance);
  });

  test('hold shifts that are still to begin, and the next local day', () => {
    expect(new Set(laws.filter(({ measure }) => measure === 'peak').map(({ shift }) => shift))).toEqual(
      new Set(['Day']),
    );
    expect(find('peak', 'acute')?.chance).toBe(result.areas[0].shifts[1].someTime.chance);
    expect(find('peak', null)).toMatchObject({ law: null, chance: result.someAreaShortByShift[1].chance });
    // The clocks have gone forward since the log began at midnight: it ends at 01:00.
    const all = find('arrivals', null);
    expect([all?.from, all?.to]).toEqual([logTo - 3600, logTo + 23 * 3600]);
    const mean = (areaId: string | null) => forecastOfLaw(find('arrivals', areaId)?.law ?? { means: [0] }).mean;
    expect(mean(null)).toBeCloseTo(mean('acute') + mean('resuscitation'), 1);
  });

  test('leave out an area that was not counted, and the department with it', () => {
    const uncounted = buildOutlookInput({
      areas: input.areas.map((area, a) => (a === 1 ? { ...area, census: null } : area)),
    });
    const own = prepareOutlook(model, uncounted);
    const part = [simulateOutlookPart(own, 0, 1000)];
    const kept = outlookLaws(own, part, outlookFromParts(own, part), model).filter(
      ({ measure }) => measure !== 'arrivals',
    );
    expect(new Set(kept.map(({ areaId }) => areaId))).toEqual(new Set(['acute']));
  });
});

describe('what a log tells', () => {
  const zone = makeZone('UTC');
  const start = Date.UTC(2031, 0, 6) / 1000;
  const hour = 3600;
  /** Arrival and departure, hours from the start; all of one area. */
  const stays = [
    [80, 84],
    [81, 81.5],
    [82, 90],
  ];
  const visits: VisitTable = {
    length: stays.length,
    area: new Uint8Array(stays.length),
    arrivalAt: Float64Array.from(stays, ([from]) => start + from * hour),
    departureAt: Float64Array.from(stays, ([, to]) => start + to * hour),
    bedSpaceAt: new Float64Array(stays.length).fill(NaN),
    admissionDecisionAt: new Float64Array(stays.length).fill(NaN),
    disposition: new Uint8Array(stays.length),
    byAmbulance: new Uint8Array(stays.length),
  };
  const truth = makeLogTruth({
    visits,
    areas: 1,
    zone,
    capHours: 72,
    spans: [{ from: start, to: start + 240 * hour }],
    gaps: [{ from: start + 200 * hour, to: start + 202 * hour }],
  });
  const at = (hours: number) => start + hours * hour;

  test('begins when the longest stay has passed, and rests while an outage is not forgotten', () => {
    expect(truth.tells(at(71), at(71))).toBe(false);
    expect(truth.tells(at(72), at(100))).toBe(true);
    expect(truth.tells(at(201), at(201))).toBe(false);
    expect(truth.tells(at(225), at(225))).toBe(false);
    expect(truth.unrecorded(at(225), at(225))).toBe(true);
    expect(truth.tells(at(226), at(226))).toBe(true);
    expect(truth.tells(at(240), at(240))).toBe(false);
    expect(truth.unrecorded(at(240), at(240))).toBe(false);
  });

  test('counts the highest need, and a shortfall only against the beds in force', () => {
    const beds = [
      [
        { at: at(0), beds: 1 },
        { at: at(82), beds: 2 },
      ],
    ];
    expect(truth.peaks(at(80), at(82), beds)).toEqual([{ peak: 2, short: true }]);
    expect(truth.peaks(at(82), at(95), beds)).toEqual([{ peak: 2, short: false }]);
    expect(truth.shortWithin(at(81.5), at(82), beds)).toEqual([false]);
    expect(truth.shortWithin(at(80), at(81.25), beds)).toEqual([true]);
  });

  test('counts the arrivals of a day', () => {
    const day = start / 86_400 + 3;
    expect(truth.onLocalDay(day)).toEqual([3]);
    expect(truth.onLocalDay(day - 1)).toEqual([0]);
    expect(truth.onLocalDay(start / 86_400 + 8)).toBeNull();
    expect(truth.onLocalDay(start / 86_400 - 1)).toBeNull();
  });
});

describe('rules of the past', () => {
  /** 40 weeks of days: 10 on weekdays, 20 on the last two, 5 more in every second week. */
  const value = (step: number) =>
    step < 0 || step >= 280 ? NaN : (step % 7 < 5 ? 10 : 20) + (Math.floor(step / 7) % 2 === 0 ? 0 : 5);
  const forecast = makePastBaselines(value, 7, 1);

  test('take the week before, the mean of four, and of a year as far as there is one', () => {
    expect(forecast('lastWeek', 280, 280)?.mean).toBe(15);
    expect(forecast('fourWeeks', 280, 280)?.mean).toBe(12.5);
    expect(forecast('year', 285, 280)?.mean).toBe(22.5);
  });

  test('say nothing where the log does not reach back', () => {
    expect(forecast('year', 14, 14)).toBeNull();
    expect(forecast('lastWeek', 3, 0)).toBeNull();
  });
});
