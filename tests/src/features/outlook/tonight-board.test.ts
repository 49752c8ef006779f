import { describe, expect, it } from 'vitest';
import { makeZone } from '../../../../shared/domain/zoned-time.ts';
import { buildBoard, pastHours } from '../../../../src/features/outlook/tonight-board.ts';
import { buildAreaOutlook, buildSite, buildTonight, hours, now } from './build-tonight.ts';

const zone = makeZone('Europe/London');
function board(tonight = buildTonight()) {
  if (!tonight.outlook) throw new Error('the test needs an outlook');
  return buildBoard(tonight, tonight.outlook, buildSite(), zone);
}

describe('buildBoard', () => {
  it('lays past hours before now and the forecast after it, past ones solid only where something speaks', () => {
    const made = board();
    expect(made.hours.slice(pastHours).map((hour) => hour.at)).toEqual(hours);
    const acute = made.areas[0].columns.slice(0, pastHours);
    expect(acute.map((column) => column.kind)).toEqual(Array.from({ length: pastHours }, () => 'past'));
    expect(acute.map((column) => (column.kind === 'past' ? column.present : -1))).toEqual([
      null,
      null,
      null,
      null,
      21,
      null,
    ]);
  });

  it('drops hours of the outlook that have passed and keeps every row aligned', () => {
    const made = board(buildTonight({ now: hours[1] + 60 }));
    expect(made.hours[pastHours].at).toBe(hours[2]);
    expect(made.areas[0].chances[0].chance).toBe(0.57);
    expect(made.areas[0].headroom).toHaveLength(hours.length - 2);
    expect(made.department.someAreaShort).toHaveLength(hours.length - 2);
  });

  it('keeps the areas in the order of the site, whatever the risk', () => {
    const made = board(buildTonight({}, [buildAreaOutlook('obs', [0.9]), buildAreaOutlook('acute', [0.1])]));
    expect(made.areas.map((row) => row.area.id)).toEqual(['acute', 'obs']);
  });

  it('says of an area that was not counted neither a first hour nor some time tonight', () => {
    const made = board(
      buildTonight({}, [buildAreaOutlook('acute', [0.9], { counted: false }), buildAreaOutlook('obs', [0.1])]),
    );
    expect(made.areas[0]).toMatchObject({ firstPast: null, someTime: null, counted: false });
    expect(made.department.counted).toBe(false);
  });

  it('takes the greater of this shift and the night, and says which it is', () => {
    const chance = (value: number) => ({ chance: value, se: 0 });
    const [late, night] = buildAreaOutlook('acute', []).shifts;
    const withShifts = (first: number, second: number) =>
      board(
        buildTonight({}, [
          buildAreaOutlook('acute', [], {
            shifts: [
              { ...late, someTime: chance(first) },
              { ...night, someTime: chance(second) },
            ],
          }),
        ]),
      ).areas[0].someTime;
    expect(withShifts(0.1, 0.3)).toEqual({ chance: chance(0.3), when: { kind: 'tonight' } });
    expect(withShifts(0.4, 0.3)).toEqual({ chance: chance(0.4), when: { kind: 'before', at: late.to } });
  });

  it('sums staffed beds of the department over its areas at each step', () => {
    const steps = board().department.staffed;
    expect(steps.at(-1)).toEqual({ at: Date.UTC(2026, 11, 1, 21) / 1000, beds: 40 });
    expect(steps.findLast((step) => step.at <= now)?.beds).toBe(48);
  });
});
