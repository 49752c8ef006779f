import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { bedsAt } from '../../../shared/domain/bed-schedule.ts';
import { inChargeSpans } from '../../../shared/domain/in-charge-spans.ts';
import { changedBeds, checkPlanChanges, dayAndTime } from '../../../shared/domain/plan-change.ts';
import type { PlanChange, PlanFrame } from '../../../shared/domain/plan-change.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';

const hour = 3600;

describe('changedBeds', () => {
  const steps = [
    { at: 0, beds: 20 },
    { at: 9 * hour, beds: 14 },
    { at: 20 * hour, beds: 20 },
  ];

  it('lays windows over the steps; those that overlap add up', () => {
    const windows = [
      { from: 8 * hour, to: 12 * hour, beds: 3 },
      { from: 10 * hour, to: 11 * hour, beds: -1 },
    ];
    expect(changedBeds(steps, windows).map(({ at, beds }) => [at / hour, beds])).toEqual([
      [0, 20],
      [8, 23],
      [9, 17],
      [10, 16],
      [11, 17],
      [12, 14],
      [20, 20],
    ]);
  });

  it('is the beds as they are plus every window in force, at every instant', () => {
    const window = fc
      .tuple(fc.integer({ min: -5, max: 40 }), fc.integer({ min: 1, max: 20 }), fc.integer({ min: -6, max: 6 }))
      .map(([from, length, beds]) => ({ from: from * 1800, to: (from + length) * 1800, beds }));
    fc.assert(
      fc.property(fc.array(window, { maxLength: 5 }), fc.integer({ min: 0, max: 30 * hour }), (windows, at) => {
        const more = windows.reduce((sum, { from, to, beds }) => (from <= at && at < to ? sum + beds : sum), 0);
        expect(bedsAt(changedBeds(steps, windows), at)).toBe(bedsAt(steps, at) + more);
      }),
    );
  });
});

describe('checkPlanChanges', () => {
  // Half-hour offsets: local half hours lie on UTC quarter hours nowhere here, but full hours differ from UTC's.
  const zone = makeZone('Asia/Kolkata');
  const from = Date.parse('2026-09-21T14:13:20Z') / 1000;
  const nine = Date.parse('2026-09-21T15:30:00Z') / 1000;
  const area = (areaId: string, more: Partial<PlanFrame['areas'][number]> = {}) => ({
    areaId,
    name: areaId,
    spaces: 20,
    boarding: 2,
    staffedBeds: [{ at: from, beds: 12 }],
    ...more,
  });
  const frame: PlanFrame = {
    from,
    to: from + 7 * 24 * hour,
    areas: [area('Acute'), area('Children', { boarding: null })],
  };
  const faults = (...changes: PlanChange[]) => checkPlanChanges(changes, frame, zone).map(({ at }) => at);
  const beds = (more: object = {}): PlanChange => ({
    kind: 'beds',
    areaId: 'Acute',
    from: nine,
    to: nine + 8 * hour,
    beds: 8,
    ...more,
  });

  it('finds nothing to say of what fits, to the edge', () => {
    expect(faults(beds(), beds({ beds: -20, from: nine + 8 * hour, to: nine + 9 * hour, areaId: 'Acute' }))).toEqual([
      'changes.1.beds',
    ]);
    expect(faults(beds())).toEqual([]);
    expect(faults(beds({ beds: -12 }))).toEqual([]);
    expect(faults({ kind: 'boarding out', areaId: 'Acute', patients: 2, by: nine })).toEqual([]);
  });

  it('adds up what several changes do to one area', () => {
    expect(faults(beds({ beds: 5 }), beds({ beds: 4, from: nine + 7 * hour, to: nine + 9 * hour }))).toEqual([
      'changes.0.beds',
      'changes.1.beds',
    ]);
    const out = { kind: 'boarding out' as const, areaId: 'Acute', by: nine };
    expect(faults({ ...out, patients: 1 }, { ...out, patients: 2 })).toEqual([
      'changes.0.patients',
      'changes.1.patients',
    ]);
  });

  it('refuses closures that meet: the same area twice, arrivals to a closed area, in any order', () => {
    const shut = (more: object): PlanChange => ({
      kind: 'closed',
      areaId: 'Acute',
      from: nine,
      to: nine + 4 * hour,
      toAreaId: null,
      ...more,
    });
    expect(faults(shut({}), shut({ from: nine + hour, to: nine + 2 * hour }))).toEqual(['changes.1.from']);
    expect(faults(shut({ toAreaId: 'Children' }), shut({ areaId: 'Children' }))).toEqual(['changes.0.toAreaId']);
    expect(
      faults(shut({ toAreaId: 'Children' }), shut({ areaId: 'Children', from: nine + 4 * hour, to: nine + 5 * hour })),
    ).toEqual([]);
    expect(
      faults({ kind: 'surge', areaId: 'Acute', from: nine - hour, to: nine + 1800, patients: 3 }, shut({})),
    ).toEqual(['changes.0.areaId']);
  });

  it('speaks in the site’s time', () => {
    expect(dayAndTime(zone, nine)).toBe('Mon 21:00');
    expect(checkPlanChanges([beds({ beds: 9 })], frame, zone)[0].message).toBe(
      'Acute would have 21 staffed beds on Mon 21:00: 20 bed spaces exist.',
    );
  });
});

describe('inChargeSpans', () => {
  it('gives the overlap at handover to the incoming shift and cuts at both ends', () => {
    const shifts = [
      { name: 'Early', from: 7 * hour, to: 14.5 * hour },
      { name: 'Late', from: 14 * hour, to: 21.5 * hour },
      { name: 'Night', from: 21 * hour, to: 31.5 * hour },
      { name: 'Early', from: 31 * hour, to: 38.5 * hour },
    ];
    expect(
      inChargeSpans(shifts, 10 * hour, 33 * hour).map(({ name, from, to }) => [name, from / hour, to / hour]),
    ).toEqual([
      ['Early', 10, 14],
      ['Late', 14, 21],
      ['Night', 21, 31],
      ['Early', 31, 33],
    ]);
    expect(inChargeSpans(shifts, 14.2 * hour, 15 * hour).map(({ name }) => name)).toEqual(['Late']);
  });
});
