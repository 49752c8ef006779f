import type { RememberedMapping } from '../../../shared/api/visit-log-mapping.ts';
import type { ExtractFactsInput } from '../../../shared/api/visit-logs.ts';
import type { DateOrder } from '../../../shared/domain/local-time.ts';
import { rareBelow } from '../../../shared/domain/value-tally.ts';
import { visitColumnNames, visitColumns, type VisitColumn } from '../../../shared/domain/visit-row.ts';
import type { FileMapping } from './check-file.ts';
import { choiceColumns, columnOf, guessOthers, timeColumns, type ChoiceColumn } from './mapping.ts';
import type { FileSurvey } from './survey-file.ts';
import { sameWord } from './word-groups.ts';

/** The site's last mapping, with who accepted it and when. */
export interface LastMapping {
  mapping: RememberedMapping;
  savedBy: string;
  savedAt: number;
}

/** The file's mapping as it is kept with the site. Words of fewer than five rows are left out: they may belong to a person. */
export function rememberedFrom(
  survey: FileSurvey,
  mapping: FileMapping,
  facts: ExtractFactsInput,
  wasAskedMissing: boolean,
): RememberedMapping {
  const header = (column: VisitColumn) => columnOf(survey, mapping, column)?.header.slice(0, 200) || null;
  const values = <T>(column: ChoiceColumn, meanings: Record<string, T>) =>
    (columnOf(survey, mapping, column)?.values ?? [])
      .filter(({ value, rows }) => rows >= rareBelow && value.length <= 200 && Object.hasOwn(meanings, value))
      .map(({ value }) => [value, meanings[value]] as const);
  return {
    columns: Object.fromEntries(visitColumns.map((column) => [column, header(column)])) as RememberedMapping['columns'],
    dateOrder: orderUsed(survey, mapping),
    repeatedHour: mapping.repeatedHour,
    areas: values('care_area', mapping.areas).map(([value, areaId]) => ({ value, areaId })),
    dispositions: values('disposition', mapping.dispositions).map(([value, code]) => ({ value, code })),
    ambulances: values('arrived_by_ambulance', mapping.ambulances).map(([value, code]) => ({ value, code })),
    selectedBy: facts.selectedBy,
    missingDeparture: wasAskedMissing ? facts.missingDeparture : null,
    arrivalMeaning: facts.arrivalMeaning ?? null,
    areaMeaning: facts.areaMeaning ?? null,
  };
}

/** The order that decided any date of the file; null if none could be read in two ways. */
function orderUsed(survey: FileSurvey, mapping: FileMapping): DateOrder | null {
  const decided = timeColumns.find((column) => {
    const verdict = columnOf(survey, mapping, column)?.dateOrder ?? 'not needed';
    return verdict !== 'not needed';
  });
  return decided === undefined ? null : mapping.dateOrders[decided];
}

/** What the site's last mapping does not tell about this file. */
export interface News {
  /** Our columns that stood under another header, or under none, as sentences. */
  columns: string[];
  /** Words that were not in the last file, by column. */
  values: Record<ChoiceColumn, ReadonlySet<string>>;
}

const noValues: ReadonlySet<string> = new Set();

/** Compares the file with the last mapping; nothing is news without one. */
export function findNews(survey: FileSurvey, mapping: FileMapping, remembered: RememberedMapping | null): News {
  const values = { care_area: noValues, disposition: noValues, arrived_by_ambulance: noValues };
  if (!remembered) return { columns: [], values };
  const columns: string[] = [];
  const others = guessOthers(survey, mapping.columns);
  for (const column of visitColumns) {
    const before = remembered.columns[column];
    const now = columnOf(survey, mapping, column)?.header ?? null;
    const name = visitColumnNames[column];
    if (before !== null && now === null) columns.push(`${name} was “${before}”, which this file does not have.`);
    else if (before !== null && now !== null && !sameHeader(before, now))
      columns.push(`${name} was “${before}” and is now “${now}”.`);
    else if (before === null && now === null && others[column] !== null)
      columns.push(`${name} was left out last time; “${survey.columns[others[column]].header}” may be it.`);
  }
  const known = {
    care_area: remembered.areas,
    disposition: remembered.dispositions,
    arrived_by_ambulance: remembered.ambulances,
  };
  for (const column of choiceColumns) {
    if (remembered.columns[column] === null) continue;
    const before = new Set(known[column].map(({ value }) => sameWord(value)));
    const fresh = (columnOf(survey, mapping, column)?.values ?? []).filter(({ value }) => !before.has(sameWord(value)));
    values[column] = new Set(fresh.map(({ value }) => value));
  }
  return { columns, values };
}

/** Headers are the same whatever their case and outer spaces. */
export function sameHeader(one: string, other: string): boolean {
  return one.trim().toLowerCase() === other.trim().toLowerCase();
}
