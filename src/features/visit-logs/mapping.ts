import type { RememberedMapping } from '../../../shared/api/visit-log-mapping.ts';
import { guessColumns } from '../../../shared/domain/guess-columns.ts';
import { guessAmbulance, guessArea, guessDisposition } from '../../../shared/domain/guess-value.ts';
import type { DateOrder } from '../../../shared/domain/local-time.ts';
import {
  requiredVisitColumns,
  visitColumnNames,
  visitColumns,
  type VisitColumn,
} from '../../../shared/domain/visit-row.ts';
import type { FileMapping } from './check-file.ts';
import { offerCounts } from './count-mapping.ts';
import type { ColumnSurvey, FileSurvey } from './survey-file.ts';
import { groupWords, sameWord } from './word-groups.ts';

export const timeColumns = ['arrival_at', 'bed_space_at', 'admission_decision_at', 'departure_at'] as const;
export const choiceColumns = ['care_area', 'disposition', 'arrived_by_ambulance'] as const;
export type ChoiceColumn = (typeof choiceColumns)[number];

export interface AreaName {
  id: string;
  name: string;
}

/** Whether a column of the file can stand for one of ours. */
export function fits(column: ColumnSurvey, ours: VisitColumn): boolean {
  const wantsTime = (timeColumns as readonly VisitColumn[]).includes(ours);
  return !column.isBarred && (wantsTime ? column.isTime : column.isChoice);
}

/** The column of the file that one of ours is mapped to. */
export function columnOf(survey: FileSurvey, mapping: FileMapping, ours: VisitColumn): ColumnSurvey | null {
  const index = mapping.columns[ours];
  return index === null ? null : survey.columns[index];
}

/**
 * The mapping that is offered first: as the site's last file was read, where that still fits; otherwise
 * columns by header and values, values by their words.
 */
export function offerMapping(
  survey: FileSurvey,
  areas: readonly AreaName[],
  remembered: RememberedMapping | null = null,
): FileMapping {
  const columns = offerColumns(survey, remembered);
  const statedOrder = remembered?.dateOrder ?? null;
  const empty: FileMapping = {
    columns,
    dateOrders: ordersOf(survey, columns, statedOrder),
    statedOrder,
    repeatedHour: remembered?.repeatedHour ?? 'refuse',
    areas: {},
    dispositions: {},
    ambulances: {},
    counts: offerCounts(survey, areas),
  };
  return choiceColumns.reduce((mapping, column) => offerValues(survey, mapping, column, areas, remembered), empty);
}

/**
 * Columns under the header of last time; one whose header is gone is guessed from those that are left. One
 * that was left unmapped stays so: it may have been left out on purpose.
 */
function offerColumns(survey: FileSurvey, remembered: RememberedMapping | null): FileMapping['columns'] {
  if (!remembered) return guessColumns(survey.columns);
  const found = Object.fromEntries(
    visitColumns.map((ours) => {
      const header = remembered.columns[ours]?.trim().toLowerCase();
      const column = survey.columns.find((each) => each.header.trim().toLowerCase() === header && fits(each, ours));
      return [ours, column?.index ?? null];
    }),
  ) as FileMapping['columns'];
  const guess = guessOthers(survey, found);
  for (const ours of visitColumns) if (remembered.columns[ours] !== null) found[ours] ??= guess[ours];
  return found;
}

/** Guesses columns from those of the file that none of ours is mapped to. */
export function guessOthers(survey: FileSurvey, columns: FileMapping['columns']): FileMapping['columns'] {
  const taken = new Set(Object.values(columns));
  return guessColumns(
    survey.columns.map((column) => (taken.has(column.index) ? { ...column, isBarred: true } : column)),
  );
}

/** Maps one of our columns to another column of the file, and offers its values anew. */
export function remap(
  survey: FileSurvey,
  mapping: FileMapping,
  ours: VisitColumn,
  index: number | null,
  areas: readonly AreaName[],
  remembered: RememberedMapping | null = null,
): FileMapping {
  const columns = { ...mapping.columns };
  // A column of the file stands for one of ours at most.
  for (const column of visitColumns) if (index !== null && columns[column] === index) columns[column] = null;
  columns[ours] = index;
  const changed = { ...mapping, columns, dateOrders: ordersOf(survey, columns, mapping.statedOrder) };
  return choiceColumns.reduce(
    (next, column) =>
      columns[column] === mapping.columns[column] ? next : offerValues(survey, next, column, areas, remembered),
    changed,
  );
}

function offerValues(
  survey: FileSurvey,
  mapping: FileMapping,
  ours: ChoiceColumn,
  areas: readonly AreaName[],
  remembered: RememberedMapping | null,
): FileMapping {
  const values = columnOf(survey, mapping, ours)?.values ?? [];
  const each = <T>(known: readonly (readonly [string, T])[], guess: (value: string) => T) => {
    const before = new Map(known.map(([value, meaning]) => [sameWord(value), meaning]));
    // Spellings of one word mean the same, so that they can be offered as one.
    return Object.fromEntries(
      groupWords(values).flatMap(({ spellings }) => {
        const word = sameWord(spellings[0]);
        const meaning = before.has(word) ? (before.get(word) as T) : guess(spellings[0]);
        return spellings.map((value) => [value, meaning]);
      }),
    );
  };
  const codes = (known: readonly { value: string; code: number | null }[] = []) =>
    known.map(({ value, code }) => [value, code] as const);
  if (ours === 'care_area') {
    // An area that the site no longer has is guessed anew.
    const known = (remembered?.areas ?? [])
      .filter(({ areaId }) => areaId === null || areas.some(({ id }) => id === areaId))
      .map(({ value, areaId }) => [value, areaId] as const);
    return { ...mapping, areas: each(known, (value) => guessArea(value, areas)) };
  }
  if (ours === 'disposition')
    return { ...mapping, dispositions: each(codes(remembered?.dispositions), guessDisposition) };
  return { ...mapping, ambulances: each(codes(remembered?.ambulances), guessAmbulance) };
}

/** Time columns whose dates could be read in either order, and no other column of the file tells. */
export function ambiguousColumns(survey: FileSurvey, mapping: FileMapping): VisitColumn[] {
  const verdicts = timeColumns.map((column) => columnOf(survey, mapping, column)?.dateOrder);
  if (verdicts.some((verdict) => verdict === 'day first' || verdict === 'month first')) return [];
  return timeColumns.filter((_, index) => verdicts[index] === 'ambiguous');
}

/** Answers the question about ambiguous dates. */
export function stateOrder(survey: FileSurvey, mapping: FileMapping, order: DateOrder): FileMapping {
  return { ...mapping, statedOrder: order, dateOrders: ordersOf(survey, mapping.columns, order) };
}

function ordersOf(
  survey: FileSurvey,
  columns: FileMapping['columns'],
  stated: DateOrder | null,
): FileMapping['dateOrders'] {
  const verdictOf = (column: VisitColumn) => {
    const index = columns[column];
    const verdict = index === null ? null : survey.columns[index].dateOrder;
    return verdict === 'day first' || verdict === 'month first' ? verdict : null;
  };
  // A column that does not tell follows those of the same file that do.
  const told = timeColumns.map(verdictOf).find((verdict) => verdict !== null);
  const orders = visitColumns.map((column) => [column, verdictOf(column) ?? told ?? stated ?? 'day first']);
  return Object.fromEntries(orders) as FileMapping['dateOrders'];
}

/** What stands in the way of checking the file, as sentences; none when it can be checked. */
export function mappingFaults(survey: FileSurvey, mapping: FileMapping): string[] {
  const faults: string[] = [];
  for (const column of requiredVisitColumns) {
    if (mapping.columns[column] === null)
      faults.push(`${visitColumnNames[column]} is needed: choose the column that holds it.`);
  }
  for (const column of timeColumns) {
    const mapped = columnOf(survey, mapping, column);
    if (mapped?.dateOrder === 'mixed') {
      faults.push(
        `“${mapped.header}” holds dates of both orders: some can only be day first, others only month first. Export it again with one order.`,
      );
    }
  }
  if (mapping.columns.care_area !== null && !Object.values(mapping.areas).some((area) => area !== null)) {
    faults.push('No value of the care area column is mapped to an area of this site.');
  }
  return faults;
}
