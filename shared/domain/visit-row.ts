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
  time(text: string, column: VisitColumn): TimeReading;
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

/** Turns records into visits, or tells everything that is wrong with them. */
export class VisitRowReader {
  private readonly places: ColumnPlaces;
  private readonly reading: VisitReading;
  private readonly latest: number;
  private readonly listener: RowListener;
  private fields: readonly string[] = [];
  private good = true;

  /** @param now UTC seconds */
  constructor(places: ColumnPlaces, reading: VisitReading, now: number, listener: RowListener) {
    this.places = places;
    this.reading = reading;
    this.latest = now + clockTolerance;
    this.listener = listener;
  }

  /**
   * @param fields of one record, as many as the header has
   * @returns null if anything was wrong
   */
  read(fields: readonly string[]): VisitRow | null {
    this.fields = fields;
    this.good = true;
    const arrivalAt = this.time('arrival_at');
    const bedSpaceAt = this.time('bed_space_at');
    const admissionDecisionAt = this.time('admission_decision_at');
    const departureAt = this.time('departure_at');
    const area = this.area();
    const disposition = this.disposition();
    const byAmbulance = this.ambulance();

    // Comparisons with NaN are false, so times that are not recorded pass.
    if (departureAt < arrivalAt) this.wrong('before arrival', 'departure_at');
    else if (departureAt - arrivalAt > longestStay) this.wrong('stay over 30 days', 'departure_at');
    if (bedSpaceAt < arrivalAt) this.wrong('before arrival', 'bed_space_at');
    if (bedSpaceAt > departureAt) this.wrong('after departure', 'bed_space_at');
    if (admissionDecisionAt < arrivalAt) this.wrong('before arrival', 'admission_decision_at');
    if (admissionDecisionAt > departureAt) this.wrong('after departure', 'admission_decision_at');

    if (!this.good) return null;
    return { area, arrivalAt, bedSpaceAt, admissionDecisionAt, departureAt, disposition, byAmbulance };
  }

  private wrong(kind: RowProblem, column: VisitColumn): void {
    this.good = false;
    this.listener.problem(kind, column);
  }

  private text(column: VisitColumn): string {
    const place = this.places[column];
    return place < 0 ? '' : this.fields[place].trim();
  }

  private time(column: VisitColumn): number {
    const text = this.text(column);
    if (text === '') {
      if (column === 'arrival_at') this.wrong('time missing', column);
      return NaN;
    }
    const time = this.reading.time(text, column);
    if (typeof time === 'string') {
      this.wrong(time === 'skipped' ? 'time skipped' : 'time repeated', column);
      return NaN;
    }
    if (Number.isNaN(time)) {
      this.listener.odd(column, text);
      this.wrong('time unreadable', column);
    } else if (time < year2000) {
      // No log of visits reaches back so far: such a column holds dates of birth.
      this.listener.identifier(column, 'date of birth');
      this.wrong('time before 2000', column);
    } else if (time > this.latest) {
      this.wrong('time in the future', column);
    }
    return time;
  }

  private area(): number {
    const text = this.text('care_area');
    if (text === '') {
      this.wrong('area missing', 'care_area');
      return -1;
    }
    const area = this.reading.area(text);
    if (area < 0) {
      this.listener.odd('care_area', text);
      this.wrong('area unknown', 'care_area');
    }
    return area;
  }

  private disposition(): number {
    const text = this.text('disposition');
    if (text === '') return notRecorded;
    const disposition = this.reading.disposition(text);
    if (disposition < 0) {
      this.listener.odd('disposition', text);
      this.wrong('disposition unknown', 'disposition');
    }
    return disposition;
  }

  private ambulance(): number {
    const text = this.text('arrived_by_ambulance');
    if (text === '') return notRecorded;
    const byAmbulance = this.reading.ambulance(text);
    if (byAmbulance < 0) {
      this.listener.odd('arrived_by_ambulance', text);
      this.wrong('ambulance unknown', 'arrived_by_ambulance');
    }
    return byAmbulance;
  }
}
