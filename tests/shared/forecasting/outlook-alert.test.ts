import { describe, expect, test } from 'vitest';
import type { ShiftTime } from '../../../shared/domain/shift-times.ts';
import { alertSpan, decideAlert, type LastAlert } from '../../../shared/forecasting/outlook-alert.ts';

/*
 * The rule is the product's own, no source outside it: once when an area passes its limit in the shift in charge or the
 * next; again only after its chance has fallen 5 points below the limit, or when another shift is in charge. The sequences
 * are written by hand.
 */
const hour = 3600;
const start = 1_800_000_000 - (1_800_000_000 % (24 * hour));
const at = (hours: number) => start + hours * hour;
/** Late 14–21:30, Night 21–31, Early 31–38:30, as hours of the first day; the overlap is the incoming shift's. */
const shifts: ShiftTime[] = [
  { name: 'Late', from: at(14), to: at(21.5) },
  { name: 'Night', from: at(21), to: at(31) },
  { name: 'Early', from: at(31), to: at(38.5) },
  { name: 'Late', from: at(38), to: at(45.5) },
];

interface Step {
  /** Hours of the first day. */
  issued: number;
  /** Chance at every hour of the span, or by hour of the first day. */
  chance: number | Record<number, number>;
  counted?: boolean;
}

/** Plays outlooks one after the other, keeping what the server keeps; returns at which an alert goes out. */
function play(steps: readonly Step[], { limit = 0.25, spaces = 20, pattern = shifts } = {}): number[] {
  const memory: { last: LastAlert | null } = { last: null };
  const sent: number[] = [];
  for (const { issued, chance, counted = true } of steps) {
    const hours = Array.from({ length: 36 }, (_, index) => at(Math.floor(issued) + 1 + index));
    const figures = hours.map((instant) => ({
      chance: typeof chance === 'number' ? chance : (chance[(instant - start) / hour] ?? 0),
      se: 0,
    }));
    const none = hours.map(() => ({ chance: 0, se: 0 }));
    const small = spaces <= 8;
    const decision = decideAlert({
      area: { counted, shortfall: small ? none : figures, shortfallWithin: small ? figures : none },
      spaces,
      alertLimit: limit,
      hours,
      issuedAt: at(issued),
      shifts: pattern,
      last: memory.last,
    });
    if (decision.rearm && memory.last) memory.last = { ...memory.last, rearmed: true };
    if (decision.send) {
      sent.push(issued);
      memory.last = { shiftFrom: alertSpan(pattern, at(issued)).shiftFrom, rearmed: false };
    }
  }
  return sent;
}

describe('the hours an alert speaks of', () => {
  test('end with the next shift', () => {
    expect(alertSpan(shifts, at(15))).toEqual({ shiftFrom: at(14), until: at(31) });
    // In the handover the incoming shift is in charge.
    expect(alertSpan(shifts, at(21.25))).toEqual({ shiftFrom: at(21), until: at(38.5) });
    // In a gap before a shift, that shift is the next.
    expect(alertSpan(shifts.slice(1), at(20))).toEqual({ shiftFrom: null, until: at(31) });
    expect(alertSpan([], at(15))).toEqual({ shiftFrom: null, until: at(31) });
  });

  test.each([
    ['in this shift', 20, [15]],
    ['in the next', 30, [15]],
    ['at the very end of the next, which is the one after', 31, []],
    ['in the one after', 33, []],
    ['in the past', 14, []],
  ])('a passing %s', (_, when, sent) => {
    expect(play([{ issued: 15, chance: { [when]: 0.9 } }])).toEqual(sent);
  });

  test('of a small area are judged by what is printed for it: any time within the hour', () => {
    expect(play([{ issued: 15, chance: 0.9 }], { spaces: 4 })).toEqual([15]);
  });
});

describe('a sequence of outlooks', () => {
  const outlooks = (...pairs: [number, number][]): Step[] => pairs.map(([issued, chance]) => ({ issued, chance }));

  test.each<[string, Step[], number[]]>([
    ['never past the limit: nothing', outlooks([15, 0.1], [16, 0.2], [17, 0.25]), []],
    ['past it for hours: once', outlooks([15, 0.1], [16, 0.3], [16.5, 0.6], [17, 0.9], [18, 0.3]), [16]],
    ['hovering about it: once', outlooks([15, 0.26], [16, 0.24], [17, 0.26], [18, 0.21], [19, 0.5]), [15]],
    [
      'fallen by five points and past it again: twice',
      outlooks([15, 0.3], [16, 0.2], [17, 0.24], [18, 0.26]),
      [15, 18],
    ],
    [
      'fallen and risen more than once within a shift',
      outlooks([15, 0.3], [16, 0], [17, 0.3], [18, 0.21], [19, 0.3], [20, 0.1], [20.5, 0.3]),
      [15, 17, 20.5],
    ],
    [
      'past it into the next shift: that one is told once too',
      outlooks([15, 0.3], [20, 0.3], [21, 0.3], [22, 0.3]),
      [15, 21],
    ],
    ['past it only in the new shift', outlooks([15, 0.1], [21, 0.1], [22, 0.3], [23, 0.3]), [22]],
    [
      'under it at the change of shift, past it later: told',
      outlooks([15, 0.3], [21, 0.24], [23, 0.26], [24, 0.3]),
      [15, 23],
    ],
    [
      'without a census in between: neither told nor taken for calm',
      [
        { issued: 15, chance: 0.3 },
        { issued: 16, chance: 0, counted: false },
        { issued: 17, chance: 0.3 },
      ],
      [15],
    ],
    ['never counted: nothing', [{ issued: 15, chance: 0.9, counted: false }], []],
  ])('%s', (_, steps, sent) => {
    expect(play(steps)).toEqual(sent);
  });

  test.each([
    [0.15, 0.1, true],
    [0.15, 0.101, false],
    [0.4, 0.35, true],
    [0.1, 0.05, true],
    // Under a limit of 10 % a fall of five points would be nearly all of it, or more than there is.
    [0.04, 0.02, true],
    [0.04, 0.021, false],
    [0.01, 0.005, true],
  ])('with a limit of %f a fall to %f is enough: %s', (limit, low, enough) => {
    const steps = outlooks([15, 0.9], [16, low], [17, 0.9]);
    expect(play(steps, { limit })).toEqual(enough ? [15, 17] : [15]);
  });

  test('a gap between shifts is no new shift', () => {
    const pattern = [shifts[0], { ...shifts[1], from: at(23) }, shifts[2]];
    const steps = outlooks([20, 0.3], [22, 0.3], [23, 0.3], [24, 0.3]);
    expect(play(steps, { pattern })).toEqual([20, 23]);
  });

  test('without shifts an area is told of once until it has fallen', () => {
    const steps = outlooks([15, 0.3], [22, 0.3], [31, 0.3], [32, 0.1], [33, 0.3]);
    expect(play(steps, { pattern: [] })).toEqual([15, 33]);
  });
});

test('what is told: the highest chance, its hour and every hour past the limit', () => {
  const hours = [16, 17, 18, 19].map(at);
  const shortfall = [0.1, 0.3, 0.7, 0.26].map((chance) => ({ chance, se: 0 }));
  const area = { counted: true, shortfall, shortfallWithin: [] };
  const decision = decideAlert({ area, spaces: 20, alertLimit: 0.25, hours, issuedAt: at(15), shifts, last: null });
  expect(decision).toEqual({ send: true, rearm: false, chance: 0.7, peakIndex: 2, past: [1, 2, 3] });
});
