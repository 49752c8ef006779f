import { describe, expect, test } from 'vitest';
import {
  ambiguousColumns,
  mappingFaults,
  offerMapping,
  remap,
  stateOrder,
} from '../../../../src/features/visit-logs/mapping.ts';
import type { ColumnSurvey, FileSurvey } from '../../../../src/features/visit-logs/survey-file.ts';

const areas = [
  { id: 'a1', name: 'Acute' },
  { id: 'a2', name: 'Fast track' },
];

function column(header: string, more: Partial<ColumnSurvey> = {}): Omit<ColumnSurvey, 'index'> {
  const values = more.values ?? null;
  return {
    header,
    filled: 10,
    isTime: values === null,
    isChoice: values !== null,
    isBarred: false,
    identifier: null,
    dateOrder: 'not needed',
    contraryDates: 0,
    values,
    ...more,
  };
}

function survey(...columns: Omit<ColumnSurvey, 'index'>[]): FileSurvey {
  return {
    kind: 'text',
    facts: { sheet: null, encounters: null },
    encoding: 'utf-8',
    form: { delimiter: ',', newline: '\n' },
    rows: 10,
    columns: columns.map((each, index) => ({ ...each, index })),
  };
}

const words = (...values: string[]) => ({ values: values.map((value) => ({ value, rows: 5 })) });

describe('the mapping that is offered', () => {
  test('goes by header and by what the column holds', () => {
    const found = survey(
      column('Attendance Date/Time'),
      column('Left Department'),
      column('DTA Time'),
      column('Time in cubicle'),
      column('Location', words('ACUTE', 'Fast-Track', 'Corridor')),
      column('Outcome', words('Discharged home', 'Admitted', 'DNW', '???')),
      column('Arrival Mode', words('Ambulance', 'Walk-in')),
      column('Arrival shift', words('Early', 'Late')),
    );
    const mapping = offerMapping(found, areas);
    expect(mapping.columns).toEqual({
      arrival_at: 0,
      departure_at: 1,
      admission_decision_at: 2,
      bed_space_at: 3,
      care_area: 4,
      disposition: 5,
      arrived_by_ambulance: 6,
    });
    expect(mapping.areas).toEqual({ ACUTE: 'a1', 'Fast-Track': 'a2', Corridor: null });
    expect(mapping.dispositions).toEqual({ 'Discharged home': 0, Admitted: 1, DNW: 3, '???': 255 });
    expect(mapping.ambulances).toEqual({ Ambulance: 1, 'Walk-in': 0 });
    expect(mappingFaults(found, mapping)).toEqual([]);
  });

  test('never takes a barred column, and says what is needed', () => {
    const found = survey(
      column('Arrival', { isBarred: true, identifier: { kind: 'date of birth', from: 'values' } }),
      column('Ward', words('x')),
    );
    const mapping = offerMapping(found, areas);
    expect(mapping.columns.arrival_at).toBeNull();
    expect(mappingFaults(found, mapping)).toEqual([
      'Arrival is needed: choose the column that holds it.',
      'No value of the care area column is mapped to an area of this site.',
    ]);
  });

  test('a column moves from one of ours to another, and its values are offered anew', () => {
    const found = survey(column('Arrival'), column('Area', words('Acute')), column('Zone', words('Fast track')));
    const moved = remap(found, offerMapping(found, areas), 'care_area', 2, areas);
    expect(moved.areas).toEqual({ 'Fast track': 'a2' });
    const swapped = remap(found, moved, 'disposition', 2, areas);
    expect(swapped.columns).toMatchObject({ care_area: null, disposition: 2 });
    expect(swapped.areas).toEqual({});
  });
});

describe('the order of day and month', () => {
  test('is asked only if no mapped column tells, and one answer holds for all', () => {
    const found = survey(
      column('Arrival', { dateOrder: 'ambiguous' }),
      column('Departure', { dateOrder: 'ambiguous' }),
      column('Area', words('Acute')),
    );
    const mapping = offerMapping(found, areas);
    expect(ambiguousColumns(found, mapping)).toEqual(['arrival_at', 'departure_at']);
    const stated = stateOrder(found, mapping, 'month first');
    expect([stated.dateOrders.arrival_at, stated.dateOrders.departure_at]).toEqual(['month first', 'month first']);
  });

  test('a column that tells speaks for those that do not', () => {
    const found = survey(
      column('Arrival', { dateOrder: 'ambiguous' }),
      column('Departure', { dateOrder: 'month first' }),
      column('Area', words('Acute')),
    );
    const mapping = offerMapping(found, areas);
    expect(ambiguousColumns(found, mapping)).toEqual([]);
    expect(mapping.dateOrders.arrival_at).toBe('month first');
  });

  test('a column of both orders cannot be checked', () => {
    const found = survey(column('Arrival', { dateOrder: 'mixed' }), column('Area', words('Acute')));
    expect(mappingFaults(found, offerMapping(found, areas))[0]).toMatch(/both orders/);
  });
});
