import { describe, expect, it } from 'vitest';
import { changedBeds } from '../../../shared/domain/plan-change.ts';
import { weekWaits } from '../../../shared/forecasting/week-waits.ts';
import { buildOutlookModel } from '../../support/build-outlook-model.ts';
import { buildWeekInput } from '../../support/build-week-input.ts';

const model = buildOutlookModel();
const base = buildWeekInput();
const shifts = base.shifts.slice(0, 5);
const end = shifts[4].to;

/** Two days with a limit of an hour; the acute area with beds for its average alone, so that some shifts pass the limit. */
const input = {
  ...base,
  hours: base.hours.filter((at) => at <= end + 3600),
  shifts,
  waitLimitMinutes: 60,
  areas: base.areas.map((area, a) =>
    a === 0 ? { ...area, spaces: 40, staffedBeds: area.staffedBeds.map((step) => ({ ...step, beds: 15 })) } : area,
  ),
};

describe('weekWaits', () => {
  const waits = weekWaits(model, input);
  const acute = waits?.areas[0] ?? [];

  it('tells by shift how long arrivals wait, and the share past the site’s limit, the same digits again', () => {
    expect(waits).toMatchObject({ limitMinutes: 60, share: input.planningRisk });
    expect(acute).toHaveLength(shifts.length);
    expect(weekWaits(model, input)).toEqual(waits);
    for (const { arrivals, meanMinutes, overLimit } of acute) {
      expect(arrivals).toBeGreaterThan(0);
      expect(meanMinutes).toBeGreaterThanOrEqual(0);
      expect(overLimit).toBeLessThanOrEqual(1);
    }
    expect(Math.max(...acute.map(({ overLimit }) => overLimit ?? 0))).toBeGreaterThan(input.planningRisk);
  });

  it('the beds to add are the fewest steps that keep the share: staffed, they do; a step fewer do not', () => {
    const s = acute.findIndex(({ bedsToAdd }) => (bedsToAdd ?? 0) > 2);
    const { bedsToAdd } = acute[s];
    const share = (beds: number): number => {
      const next = shifts.find(({ from }) => from > shifts[s].from);
      const span = { from: Math.max(shifts[s].from, input.issuedAt), to: Math.min(shifts[s].to, next?.from ?? end) };
      const areas = input.areas.map((area, a) =>
        a === 0 ? { ...area, staffedBeds: changedBeds(area.staffedBeds, [{ ...span, beds }]) } : area,
      );
      return weekWaits(model, { ...input, areas, planningRisk: 0.999 })?.areas[0]?.[s].overLimit ?? NaN;
    };
    // The beds change where shifts begin and end, so that the draws are the same.
    expect(share(bedsToAdd ?? 0)).toBeLessThanOrEqual(input.planningRisk);
    expect(share((bedsToAdd ?? 0) - input.areas[0].bedStep)).toBeGreaterThan(input.planningRisk);
    for (const { overLimit, bedsToAdd: added } of acute) {
      expect(added === 0).toBe((overLimit ?? 0) <= input.planningRisk);
    }
  });

  it('says where not every space that exists is enough, and what cannot be known', () => {
    const few = input.areas.map((area) => ({ ...area, spaces: 15 }));
    const full = weekWaits(model, { ...input, areas: few })?.areas[0] ?? [];
    expect(full.some(({ bedsToAdd }) => bedsToAdd === null)).toBe(true);
    const without = { ...model, stay: { ...model.stay, bedSpace: [null, model.stay.bedSpace[1]] } };
    const unknown = weekWaits(without, input);
    expect(unknown?.areas[0]).toBeNull();
    expect(unknown?.areas[1]).not.toBeNull();
    expect(weekWaits(model, { ...input, waitLimitMinutes: null })).toBeNull();
  });
});
