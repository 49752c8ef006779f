import type { IdentifierKind } from './identifier-kind.ts';

/** Columns of the product's own visit log, in their order. */
export const visitColumns = [
  'arrival_at',
  'bed_space_at',
  'admission_decision_at',
  'departure_at',
  'care_area',
  'disposition',
  'arrived_by_ambulance',
] as const;
export type VisitColumn = (typeof visitColumns)[number];

/** A log without these cannot be read. */
export const requiredVisitColumns: readonly VisitColumn[] = ['arrival_at', 'care_area'];

/** What each column is called on screen. */
export const visitColumnNames: Record<VisitColumn, string> = {
  arrival_at: 'Arrival',
  bed_space_at: 'Bed space',
  admission_decision_at: 'Admission decision',
  departure_at: 'Departure',
  care_area: 'Care area',
  disposition: 'Disposition',
  arrived_by_ambulance: 'By ambulance',
};

/** Stored in place of a disposition or an answer that was not recorded. */
export const notRecorded = 255;

/** One visit as read. Times are UTC seconds, NaN where not recorded; `area` is the care area's code. */
export interface VisitRow {
  area: number;
  arrivalAt: number;
  bedSpaceAt: number;
  admissionDecisionAt: number;
  departureAt: number;
  /** Code of shared/domain/disposition, 255 where not recorded. */
  disposition: number;
  /** 1, 0, or 255 where not recorded. */
  byAmbulance: number;
}

/** What can be wrong with a row, in the words that a report uses. The order is the report's. */
export const rowProblems = {
  'wrong number of fields': 'The row has more or fewer fields than the header.',
  'time missing': 'No time is given, and the column is needed.',
  'time unreadable': 'The time cannot be read.',
  'time skipped': 'The clock change skipped this local time.',
  'time repeated': 'The local time came twice that night, and it is not known which was meant.',
  'time in the future': 'The time lies in the future.',
  'time before 2000': 'The time lies before the year 2000.',
  'area missing': 'No care area is given.',
  'area unknown': 'The care area is not one of the site’s.',
  'disposition unknown': 'The disposition is none of home, admitted, transferred, left before treatment.',
  'ambulance unknown': 'The answer is neither yes nor no.',
  'before arrival': 'The time lies before the arrival.',
  'after departure': 'The time lies after the departure.',
  'stay over 30 days': 'The stay is longer than 30 days.',
} as const;
export type RowProblem = keyof typeof rowProblems;

/** What a reading of a time can end in besides UTC seconds (NaN stands for unreadable). */
export type TimeReading = number | 'skipped' | 'repeated';

/** How the texts of a file are understood; -1 stands for a value that is none of those known. */
export interface VisitReading {
  time(text: string): TimeReading;
  area(text: string): number;
  disposition(text: string): number;
  ambulance(text: string): number;
}

/** Where each column stands in a record; -1 if the file has none. */
export type ColumnPlaces = Readonly<Record<VisitColumn, number>>;

/** Is told what is wrong with a row. */
export interface RowListener {
  problem(kind: RowProblem, column: VisitColumn | null): void;
  /** A value that is not what its column holds: it is to be screened. */
  odd(column: VisitColumn, value: string): void;
  /** A value that could identify a patient for sure. */
  identifier(column: VisitColumn, kind: IdentifierKind): void;
}

const year2000 = 946_684_800;
const longestStay = 30 * 86_400;
/** Clocks of two machines may differ by as much. */
const clockTolerance = 300;

/**
 * Turns one record into a visit, or tells everything that is wrong with it.
 * @param fields as many as the header has
 * @param now UTC seconds
 * @returns null if anything was wrong
 */
export function readVisitRow(
  fields: readonly string[],
  places: ColumnPlaces,
  reading: VisitReading,
  now: number,
  listener: RowListener,
): VisitRow | null {
  let good = true;
  const wrong = (kind: RowProblem, column: VisitColumn) => {
    good = false;
    listener.problem(kind, column);
  };
  const textOf = (column: VisitColumn) => (places[column] < 0 ? '' : fields[places[column]].trim());
  const timeOf = (column: VisitColumn): number => {
    const text = textOf(column);
    if (text === '') {
      if (column === 'arrival_at') wrong('time missing', column);
      return NaN;
    }
    const time = reading.time(text);
    if (typeof time === 'string') {
      wrong(time === 'skipped' ? 'time skipped' : 'time repeated', column);
      return NaN;
    }
    if (Number.isNaN(time)) {
      listener.odd(column, text);
      wrong('time unreadable', column);
    } else if (time < year2000) {
      // No log of visits reaches back so far: such a column holds dates of birth.
      listener.identifier(column, 'date of birth');
      wrong('time before 2000', column);
    } else if (time > now + clockTolerance) {
      wrong('time in the future', column);
    }
    return time;
  };

  const arrivalAt = timeOf('arrival_at');
  const bedSpaceAt = timeOf('bed_space_at');
  const admissionDecisionAt = timeOf('admission_decision_at');
  const departureAt = timeOf('departure_at');

  const areaText = textOf('care_area');
  let area = -1;
  if (areaText === '') wrong('area missing', 'care_area');
  else {
    area = reading.area(areaText);
    if (area < 0) {
      listener.odd('care_area', areaText);
      wrong('area unknown', 'care_area');
    }
  }
  const dispositionText = textOf('disposition');
  const disposition = dispositionText === '' ? notRecorded : reading.disposition(dispositionText);
  if (disposition < 0) {
    listener.odd('disposition', dispositionText);
    wrong('disposition unknown', 'disposition');
  }
  const ambulanceText = textOf('arrived_by_ambulance');
  const byAmbulance = ambulanceText === '' ? notRecorded : reading.ambulance(ambulanceText);
  if (byAmbulance < 0) {
    listener.odd('arrived_by_ambulance', ambulanceText);
    wrong('ambulance unknown', 'arrived_by_ambulance');
  }

  // Comparisons with NaN are false, so times that are not recorded pass.
  if (departureAt < arrivalAt) wrong('before arrival', 'departure_at');
  else if (departureAt - arrivalAt > longestStay) wrong('stay over 30 days', 'departure_at');
  if (bedSpaceAt < arrivalAt) wrong('before arrival', 'bed_space_at');
  if (bedSpaceAt > departureAt) wrong('after departure', 'bed_space_at');
  if (admissionDecisionAt < arrivalAt) wrong('before arrival', 'admission_decision_at');
  if (admissionDecisionAt > departureAt) wrong('after departure', 'admission_decision_at');

  return good ? { area, arrivalAt, bedSpaceAt, admissionDecisionAt, departureAt, disposition, byAmbulance } : null;
}
