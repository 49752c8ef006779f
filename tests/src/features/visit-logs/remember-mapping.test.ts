import { describe, expect, test } from 'vitest';
import { offerMapping } from '../../../../src/features/visit-logs/mapping.ts';
import { findNews, rememberedFrom } from '../../../../src/features/visit-logs/remember-mapping.ts';
import type { ColumnSurvey, FileSurvey } from '../../../../src/features/visit-logs/survey-file.ts';

const areas = [
  { id: 'a1', name: 'Acute' },
  { id: 'a2', name: 'Fast track' },
];

function survey(
  columns: [header: string, values?: Record<string, number>, more?: Partial<ColumnSurvey>][],
): FileSurvey {
  return {
    kind: 'text',
    facts: { sheet: null, encounters: null },
    encoding: 'utf-8',
    form: { delimiter: ',', newline: '\n' },
    rows: 100,
    columns: columns.map(([header, values, more], index) => ({
      index,
      header,
      filled: 100,
      isTime: values === undefined,
      isChoice: values !== undefined,
      isBarred: false,
      identifier: null,
      dateOrder: 'not needed',
      contraryDates: 0,
      values: values ? Object.entries(values).map(([value, rows]) => ({ value, rows })) : null,
      ...more,
    })),
  };
}

const facts = {
  selectedBy: 'arrived',
  takenAt: 1_790_000_000,
  missingDeparture: 'unknown',
  arrivalMeaning: 'registration',
  areaMeaning: 'first',
} as const;

const first = survey([
  ['Start'],
  ['End', undefined, { dateOrder: 'ambiguous' }],
  ['Where', { C3: 60, D1: 36, Odd: 4 }],
  ['How', { A: 90, Z: 10 }],
]);
/** As the steward corrected it: nothing of it could be guessed. */
const corrected = {
  ...offerMapping(first, areas),
  columns: {
    arrival_at: 0,
    bed_space_at: null,
    admission_decision_at: null,
    departure_at: 1,
    care_area: 2,
    disposition: 3,
    arrived_by_ambulance: null,
  },
  dateOrders: { ...offerMapping(first, areas).dateOrders, departure_at: 'month first' as const },
  statedOrder: 'month first' as const,
  repeatedHour: 'later' as const,
  areas: { C3: 'a1', D1: 'a2', Odd: null },
  dispositions: { A: 0, Z: null },
};
const remembered = rememberedFrom(first, corrected, facts, false);

describe('what is remembered of a file', () => {
  test('columns by header, words with their meanings, the answers; never a word of fewer than five rows', () => {
    expect(remembered).toEqual({
      columns: {
        arrival_at: 'Start',
        bed_space_at: null,
        admission_decision_at: null,
        departure_at: 'End',
        care_area: 'Where',
        disposition: 'How',
        arrived_by_ambulance: null,
      },
      dateOrder: 'month first',
      repeatedHour: 'later',
      areas: [
        { value: 'C3', areaId: 'a1' },
        { value: 'D1', areaId: 'a2' },
      ],
      dispositions: [
        { value: 'A', code: 0 },
        { value: 'Z', code: null },
      ],
      ambulances: [],
      selectedBy: 'arrived',
      // Nobody was asked what a missing departure means.
      missingDeparture: null,
      arrivalMeaning: 'registration',
      areaMeaning: 'first',
    });
  });
});

describe('the next file of the site', () => {
  test('is mapped the same, wherever its columns stand, and nothing is news', () => {
    const next = survey([
      ['how ', { A: 50, Z: 50 }],
      ['WHERE', { D1: 50, C3: 50 }],
      ['End', undefined, { dateOrder: 'ambiguous' }],
      ['Start'],
    ]);
    const mapping = offerMapping(next, areas, remembered);
    expect(mapping).toMatchObject({
      columns: { arrival_at: 3, departure_at: 2, care_area: 1, disposition: 0 },
      statedOrder: 'month first',
      repeatedHour: 'later',
      areas: { C3: 'a1', D1: 'a2' },
      dispositions: { A: 0, Z: null },
    });
    expect(mapping.dateOrders.departure_at).toBe('month first');
    const news = findNews(next, mapping, remembered);
    expect(news.columns).toEqual([]);
    expect([...news.values.care_area, ...news.values.disposition]).toEqual([]);
  });

  test('new words are guessed and pointed out; dates that tell their order win over the memory', () => {
    const next = survey([
      ['Start', undefined, { dateOrder: 'day first' }],
      ['End', undefined, { dateOrder: 'ambiguous' }],
      ['Where', { C3: 50, 'FAST TRACK': 50 }],
      ['How', { A: 99, Q: 1 }],
    ]);
    const mapping = offerMapping(next, areas, remembered);
    expect(mapping.areas).toEqual({ C3: 'a1', 'FAST TRACK': 'a2' });
    expect(mapping.dateOrders.departure_at).toBe('day first');
    const { values } = findNews(next, mapping, remembered);
    expect([...values.care_area]).toEqual(['FAST TRACK']);
    expect([...values.disposition]).toEqual(['Q']);
  });

  test('a header that is gone is guessed anew, and one that was left out stays out; both are told', () => {
    const next = survey([
      ['Start'],
      ['Departure time'],
      ['Where', { C3: 100 }],
      ['How', { A: 100 }],
      ['Arrived by ambulance', { Y: 50, N: 50 }],
    ]);
    const mapping = offerMapping(next, areas, remembered);
    expect(mapping.columns).toMatchObject({ departure_at: 1, arrived_by_ambulance: null });
    expect(findNews(next, mapping, remembered).columns).toEqual([
      'Departure was “End” and is now “Departure time”.',
      'By ambulance was left out last time; “Arrived by ambulance” may be it.',
    ]);
  });

  test('an area that the site no longer has is not offered; a barred column is not taken', () => {
    const next = survey([['Start'], ['End'], ['Where', { C3: 50, D1: 50 }], ['How', { A: 9 }, { isBarred: true }]]);
    const mapping = offerMapping(next, [{ id: 'a2', name: 'Fast track' }], remembered);
    expect(mapping.areas).toEqual({ C3: null, D1: 'a2' });
    expect(mapping.columns.disposition).toBeNull();
  });
});
