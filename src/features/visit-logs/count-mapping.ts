import { headerWords } from '../../../shared/domain/screen-header.ts';
import { guessArea } from '../../../shared/domain/guess-value.ts';
import {
  countColumnNames,
  countColumns,
  requiredCountColumns,
  type CountColumn,
  type CountReading,
} from '../../../shared/domain/hourly-count.ts';
import { readLocalTime, type DateOrder } from '../../../shared/domain/local-time.ts';
import type { AreaName } from './mapping.ts';
import type { ColumnSurvey, FileSurvey } from './survey-file.ts';

/** How a file of hourly counts is read. */
export interface CountMapping {
  /** Index of the file's column; null where there is none. Date and hour may stand in one column. */
  columns: Record<CountColumn, number | null>;
  /** The answer to the question about dates that the column does not tell; null while not answered. */
  statedOrder: DateOrder | null;
  /** Each value of the care area column to the id of an area; null if it is none. */
  areas: Record<string, string | null>;
  /** An hour without a row had no arrivals; null while not said. */
  missing: 'none came' | 'not known';
}

const rules: Record<CountColumn, RegExp> = {
  care_area: /\b(?:area|zone|unit|ward|pod|location|stream|department|dept)\b/,
  local_date: /\b(?:date|day)\b/,
  hour: /\b(?:hour|hr|hours)\b/,
  arrivals: /\b(?:arriv\w*|attend\w*|registration\w*|came)\b/,
  departures: /\b(?:depart\w*|left|discharg\w*|exit\w*)\b/,
};

/** The columns that hold hourly counts, by their names; null if the file does not look like one. */
export function offerCounts(survey: FileSurvey, areas: readonly AreaName[]): CountMapping | null {
  const taken = new Set<number>();
  const find = (ours: CountColumn): number | null => {
    const wantsCount = ours === 'arrivals' || ours === 'departures';
    const column = survey.columns.find(
      (each) =>
        !each.isBarred &&
        !taken.has(each.index) &&
        !(wantsCount && !holdsCounts(each)) &&
        (each.header.toLowerCase() === ours || rules[ours].test(headerWords(each.header))),
    );
    if (!column) return null;
    taken.add(column.index);
    return column.index;
  };
  // The hour first: a column may be called the hour of the day.
  const order: CountColumn[] = ['hour', 'local_date', 'care_area', 'arrivals', 'departures'];
  const columns = Object.fromEntries(order.map((ours) => [ours, find(ours)])) as CountMapping['columns'];
  if (requiredCountColumns.some((column) => columns[column] === null)) return null;
  return withAreas(survey, { columns, statedOrder: null, areas: {}, missing: 'not known' }, areas);
}

/** Numbers, and neither times nor words such as a yes or no. */
function holdsCounts(column: ColumnSurvey): boolean {
  return !column.isTime && (column.values ?? []).every(({ value }) => /^\d+$/.test(value));
}

/** A mapping to begin with when the person says that the file holds counts. */
export function emptyCounts(): CountMapping {
  return {
    columns: { care_area: null, local_date: null, hour: null, arrivals: null, departures: null },
    statedOrder: null,
    areas: {},
    missing: 'not known',
  };
}

/** Maps one of our columns to another column of the file. */
export function remapCounts(
  survey: FileSurvey,
  mapping: CountMapping,
  ours: CountColumn,
  index: number | null,
  areas: readonly AreaName[],
): CountMapping {
  const changed = { ...mapping, columns: { ...mapping.columns, [ours]: index } };
  return ours === 'care_area' ? withAreas(survey, changed, areas) : changed;
}

function withAreas(survey: FileSurvey, mapping: CountMapping, areas: readonly AreaName[]): CountMapping {
  const values = columnOfCounts(survey, mapping, 'care_area')?.values ?? [];
  return { ...mapping, areas: Object.fromEntries(values.map(({ value }) => [value, guessArea(value, areas)])) };
}

export function columnOfCounts(survey: FileSurvey, mapping: CountMapping, ours: CountColumn): ColumnSurvey | null {
  const index = mapping.columns[ours];
  return index === null ? null : survey.columns[index];
}

/** Whether a column of the file can stand for one of ours. */
export function fitsCounts(column: ColumnSurvey, ours: CountColumn): boolean {
  return !column.isBarred && (ours === 'care_area' ? column.isChoice : true);
}

/** Whether the date column could be read in either order. */
export function asksCountOrder(survey: FileSurvey, mapping: CountMapping): boolean {
  return columnOfCounts(survey, mapping, 'local_date')?.dateOrder === 'ambiguous';
}

/** What stands in the way of checking the file, as sentences. */
export function countFaults(survey: FileSurvey, mapping: CountMapping): string[] {
  const faults = requiredCountColumns
    .filter((column) => mapping.columns[column] === null)
    .map((column) => `${countColumnNames[column]} is needed: choose the column that holds it.`);
  const mapped = countColumns.filter((column) => mapping.columns[column] !== null);
  for (const [at, column] of mapped.entries()) {
    const same = mapped.slice(0, at).find((other) => mapping.columns[other] === mapping.columns[column]);
    const mayShare = same === 'local_date' && column === 'hour';
    if (same && !mayShare)
      faults.push(`${countColumnNames[same]} and ${countColumnNames[column]} cannot be the same column.`);
  }
  const date = columnOfCounts(survey, mapping, 'local_date');
  if (date?.dateOrder === 'mixed') {
    faults.push(
      `“${date.header}” holds dates of both orders: some can only be day first, others only month first. Export it again with one order.`,
    );
  }
  if (mapping.columns.care_area !== null && Object.values(mapping.areas).some((area) => area === null)) {
    faults.push('Say of each value of the care area column which area it means: hours cannot be left out.');
  }
  return faults;
}

const dateOnly = /^\d{1,4}[-/.]\d{1,2}[-/.]\d{1,4}$/;
const compactDate = /^\d{8}$/;
const clockHour = /^(\d{1,2})(?:[:.]00){0,2}$/;

/** How the texts of the file are understood: dates and hours as exports write them, areas as mapped. */
export function countReading(survey: FileSurvey, mapping: CountMapping, areaIds: readonly string[]): CountReading {
  const verdict = columnOfCounts(survey, mapping, 'local_date')?.dateOrder;
  const order = verdict === 'day first' || verdict === 'month first' ? verdict : (mapping.statedOrder ?? 'day first');
  const areas = new Map(
    Object.entries(mapping.areas).map(([value, id]) => [value, id === null ? -1 : areaIds.indexOf(id)] as const),
  );
  const secondsOf = (text: string) => {
    const compact = compactDate.test(text) ? `${text} 00:00` : text;
    return readLocalTime(dateOnly.test(compact) ? `${compact} 00:00` : compact, order);
  };
  return {
    area: (text) => areas.get(text) ?? -1,
    day: (text) => Math.floor(secondsOf(text) / 86_400),
    hour(text) {
      const found = clockHour.exec(text);
      if (found) return Number(found[1]) <= 23 ? Number(found[1]) : NaN;
      const seconds = readLocalTime(text, order);
      return seconds % 3600 === 0 ? Math.floor(seconds / 3600) % 24 : NaN;
    },
  };
}
