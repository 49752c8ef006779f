import { describe, expect, test } from 'vitest';
import { dispositionCode } from '../../../shared/domain/disposition.ts';
import { presentByHour } from '../../../shared/forecasting/present-by-hour.ts';
import type { VisitTable } from '../../../shared/forecasting/visit-table.ts';
import { meanOfWeeks, weeksInHindsight } from '../../../shared/forecasting/weeks-in-hindsight.ts';
import { makeStream } from '../../../shared/stochastic/random.ts';

const hour = 3600;
const week = 168 * hour;
const start = Date.UTC(2031, 0, 6) / 1000;

interface Row {
  area?: number;
  arrival: number;
  bed?: number;
  decision?: number;
  departure?: number;
  end?: keyof typeof dispositionCode;
}

/** Times in hours from the start of the first week. */
function tableOf(rows: Row[]): VisitTable {
  const at = (value: number | undefined) => (value === undefined ? NaN : start + value * hour);
  return {
    length: rows.length,
    area: Uint8Array.from(rows, ({ area }) => area ?? 0),
    arrivalAt: Float64Array.from(rows, ({ arrival }) => at(arrival)),
    bedSpaceAt: Float64Array.from(rows, ({ bed }) => at(bed)),
    admissionDecisionAt: Float64Array.from(rows, ({ decision }) => at(decision)),
    departureAt: Float64Array.from(rows, ({ departure }) => at(departure)),
    disposition: Uint8Array.from(rows, ({ end }) => (end === undefined ? 255 : dispositionCode[end])),
    byAmbulance: new Uint8Array(rows.length).fill(255),
  };
}

const twoWeeks = [
  { from: start, to: start + week },
  { from: start + week, to: start + 2 * week },
];
const whole = [{ from: start - week, to: start + 2 * week }];

function look(rows: Row[], more: Partial<Parameters<typeof weeksInHindsight>[0]> = {}) {
  return weeksInHindsight({
    visits: tableOf(rows),
    weeks: twoWeeks,
    areas: 2,
    spoken: whole,
    stayUntil: () => NaN,
    staffedAt: () => 1,
    waitLimitMinutes: 60,
    ...more,
  });
}

/* Worked by hand. */
describe('a week in hindsight', () => {
  test('hours short are full hours at which present exceeds staffed beds; any area counts once', () => {
    const [first] = look([
      { arrival: 10.5, departure: 14 },
      { arrival: 11, departure: 13 },
      { area: 1, arrival: 11.5, departure: 15 },
      { area: 1, arrival: 12, departure: 14.5 },
    ]);
    // Area 0: two present at 11:00 and 12:00 (13:00: one has left). Area 1: at 12:00, 13:00, 14:00.
    expect(first.hoursShort).toEqual([2, 3]);
    expect(first.hoursAnyShort).toBe(4);
    expect(first.arrivals).toBe(4);
  });

  test('boarding is from the decision to leaving, and its share of patient-hours is cut at the week', () => {
    const [first, second] = look([
      { arrival: 160, decision: 164, departure: 172, end: 'admitted' },
      { arrival: 20, departure: 24, end: 'home' },
    ]);
    expect(first.boardingHours).toBeCloseTo(4, 12);
    expect(first.presentHours).toBeCloseTo(8 + 4, 12);
    expect(second.boardingHours).toBeCloseTo(4, 12);
    expect(second.arrivals).toBe(0);
  });

  test('boarding is not told where decisions are missing', () => {
    const [first] = look([
      { arrival: 1, decision: 2, departure: 3, end: 'admitted' },
      { arrival: 1, departure: 3, end: 'admitted' },
    ]);
    expect(first.boardingHours).toBeNull();
  });

  test('how visits ended, and waits past the limit where bed-space times are known', () => {
    const [first] = look([
      { arrival: 1, bed: 1.5, departure: 3, end: 'home' },
      { arrival: 1, bed: 2.5, departure: 3, end: 'transferred' },
      { arrival: 2, departure: 3, end: 'left before treatment' },
      { arrival: 2, departure: 3 },
    ]);
    expect(first.dispositions).toEqual([1, 0, 1, 1, 1]);
    expect(first.waits).toEqual({ known: 2, tooLong: 1 });
    expect(look([{ arrival: 1, bed: 9, departure: 9 }], { waitLimitMinutes: null })[0].waits).toBeNull();
  });

  test('nothing is said of a week that the logs do not cover whole, nor of hours without staffed beds', () => {
    const cut = [{ from: start, to: start + 2 * week - 1 }];
    const [first, second] = look([{ arrival: 1, departure: 2 }], { spoken: cut });
    expect(first.arrivals).toBe(1);
    expect(second).toMatchObject({ arrivals: null, hoursShort: null, boardingHours: null, dispositions: null });
    expect(look([{ arrival: 1, departure: 2 }], { staffedAt: () => null })[0]).toMatchObject({
      arrivals: 1,
      hoursShort: null,
      hoursAnyShort: null,
    });
    expect(meanOfWeeks([first, second], ({ arrivals }) => arrivals, 1)).toBe(1);
    expect(meanOfWeeks([first, second], ({ arrivals }) => arrivals, 2)).toBeNull();
  });

  test('agrees at every hour with a census counted from the same log', () => {
    // An independent count (binary search over sorted arrivals) of the same invented log.
    const stream = makeStream(11, 1, 1);
    const rows: Row[] = Array.from({ length: 1500 }, () => {
      const arrival = stream.uniform() * 400 - 60;
      return { area: stream.uniform() < 0.5 ? 0 : 1, arrival, departure: arrival + stream.uniform() * 12 };
    });
    const counted = presentByHour(tableOf(rows), 2, 72);
    for (const beds of [8, 20, 26]) {
      const short = [0, 0];
      for (let at = start; at < start + week; at += hour) {
        counted.presentAt(at).forEach((present, area) => {
          if (present > beds) short[area] += 1;
        });
      }
      expect(look(rows, { staffedAt: () => beds })[0].hoursShort).toEqual(short);
    }
  });
});
