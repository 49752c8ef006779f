/** Columns of the product's own file of hourly counts, in their order. */
export const countColumns = ['care_area', 'local_date', 'hour', 'arrivals', 'departures'] as const;
export type CountColumn = (typeof countColumns)[number];

export const isCountColumn = (name: string): name is CountColumn => (countColumns as readonly string[]).includes(name);

/** A file of hourly counts without these cannot be read. */
export const requiredCountColumns: readonly CountColumn[] = ['care_area', 'local_date', 'hour', 'arrivals'];

/** What each column is called on screen. */
export const countColumnNames: Record<CountColumn, string> = {
  care_area: 'Care area',
  local_date: 'Date',
  hour: 'Hour',
  arrivals: 'Arrivals',
  departures: 'Departures',
};

/**
 * Arrivals and departures of one care area within one local hour. `localHour` counts from 1970-01-01 00:00 on the site's
 * wall clock (see zoned-time): the hour that comes twice in an autumn night is one label that lasts two hours.
 */
export interface HourlyCount {
  /** The care area's code. */
  area: number;
  localHour: number;
  arrivals: number;
  /** Null where the file gives none for the area. */
  departures: number | null;
}

/** No area of a department sees more patients in an hour; more is another column. */
export const mostAnHour = 999;

/** What can be wrong with a row of hourly counts, in the words that a refusal uses. */
export const countProblems = {
  'wrong number of fields': 'The row has more or fewer fields than the header.',
  'area missing': 'No care area is given.',
  'area unknown': 'The care area is not one of the site’s.',
  'date missing': 'No date is given.',
  'date unreadable': 'The date cannot be read. Write year-month-day, for instance 2026-03-04.',
  'date before 2000': 'The date lies before the year 2000.',
  'hour missing': 'No hour is given.',
  'hour unreadable': 'The hour is not a whole number from 0 to 23.',
  'hour not over': 'The hour was not over yet.',
  'hour skipped': 'The clock change skipped this hour, but somebody is counted in it.',
  'hour twice': 'The same hour of the same area stands in an earlier row.',
  'count missing': 'No number of arrivals is given. Write 0 where nobody came.',
  'count unreadable': 'The count is not a whole number from 0.',
  'count too large': `The count is over ${String(mostAnHour)}: no care area sees as many patients in an hour.`,
} as const;
export type CountProblem = keyof typeof countProblems;

/** Where each column stands in a record; -1 if the file has none. */
export type CountPlaces = Readonly<Record<CountColumn, number>>;

/** How the texts of a file of counts are understood. */
export interface CountReading {
  /** The care area's code; -1 for a value that is none of those known. */
  area(text: string): number;
  /** Local day, counted from 1970-01-01; NaN if it cannot be read. */
  day(text: string): number;
  /** Hour of the day, 0 to 23; NaN if it cannot be read. */
  hour(text: string): number;
}

/** What a file of counts holds, added up. */
export interface CountedFile {
  /** Local hours from the first to the last, both included. */
  firstLocalHour: number;
  lastLocalHour: number;
  areas: { area: number; arrivals: number; departures: number | null }[];
  /** Hours without a row that were taken as hours without arrivals. */
  filledHours: number;
}
