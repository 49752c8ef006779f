import { describe, expect, test } from 'vitest';
import { shiftFaults, shiftLength } from '../../../shared/domain/shift-faults.ts';

// The rules are the product's own (issue "Bad input": overlap of more than two hours, a hole); no source outside it.
const at = (text: string) => Number(text.slice(0, 2)) * 60 + Number(text.slice(3));
const shift = (name: string, start: string, end: string) => ({ name, startMinute: at(start), endMinute: at(end) });
const told = (...shifts: ReturnType<typeof shift>[]) =>
  shiftFaults(shifts).map((fault) => `${fault.at}: ${fault.message}`);

describe('shifts of a day', () => {
  test('that cover it with handovers of up to two hours have no fault, whichever starts first in the list', () => {
    const early = shift('Early', '07:00', '14:30');
    const late = shift('Late', '14:00', '21:30');
    const night = shift('Night', '21:00', '07:30');
    for (const list of [
      [early, late, night],
      [night, early, late],
      [late, night, early],
    ])
      expect(shiftFaults(list)).toEqual([]);
    expect(told(shift('Day', '07:00', '20:00'), shift('Night', '18:00', '07:00'))).toEqual([]);
    expect(told(shift('All day', '08:00', '08:00'))).toEqual([]);
  });

  test('must not overlap by a minute more than two hours', () => {
    expect(told(shift('Day', '07:00', '20:01'), shift('Night', '18:00', '07:00'))).toEqual([
      'Day and Night: They overlap by 2 h 1 min; a handover lasts 2 hours at most.',
    ]);
    // Over midnight, and one within the other.
    expect(told(shift('Late', '14:00', '02:30'), shift('Night', '23:00', '14:00'))).toEqual([
      'Late and Night: They overlap by 3 h 30 min; a handover lasts 2 hours at most.',
    ]);
    expect(told(shift('Whole day', '00:00', '00:00'), shift('Peak', '12:00', '15:00'))).toEqual([
      'Whole day and Peak: They overlap by 3 hours; a handover lasts 2 hours at most.',
    ]);
  });

  test('must leave no hole, not even at midnight', () => {
    expect(
      shiftFaults([
        shift('Early', '07:00', '14:30'),
        shift('Late', '15:00', '21:30'),
        shift('Night', '21:00', '07:30'),
      ]),
    ).toEqual([{ index: 0, field: 'endMinute', at: 'Early', message: 'No shift is on from 14:30 to 15:00.' }]);
    expect(told(shift('Day', '00:30', '12:00'), shift('Late', '12:00', '23:45'))).toEqual([
      'Late: No shift is on from 23:45 to 00:30.',
    ]);
  });

  test('have every fault told at once: names, starts, overlap, hole, none at all', () => {
    expect(told()).toEqual(['Shifts: Enter at least one shift.']);
    const faults = told(
      shift('Day', '08:00', '12:00'),
      shift(' day', '08:00', '16:00'),
      shift('Night', '20:00', '08:00'),
    );
    expect(faults).toEqual([
      ' day: Two shifts have this name.',
      'Day and  day: Both start at 08:00: only one shift can be in charge.',
      ' day: No shift is on from 16:00 to 20:00.',
    ]);
  });

  test('last until the next day where they end before they start', () => {
    expect(shiftLength(shift('Night', '21:00', '07:30'))).toBe(630);
    expect(shiftLength(shift('All day', '08:00', '08:00'))).toBe(1440);
  });
});
