import { findIdentifier } from '../../../shared/domain/find-identifier.ts';
import type { ColumnSketch } from '../../../shared/domain/guess-columns.ts';
import type { IdentifierKind } from '../../../shared/domain/identifier-kind.ts';
import { parseInstant } from '../../../shared/domain/instant.ts';
import { DateOrderTally, readLocalTime, type DateOrderVerdict } from '../../../shared/domain/local-time.ts';
import { screenHeader } from '../../../shared/domain/screen-header.ts';
import { rareBelow } from '../../../shared/domain/value-tally.ts';
import { longestRecord } from '../../../shared/domain/visit-file.ts';
import { WrongEncodingError, type Encoding } from './decode-file.ts';
import { findRecordForm, makeRecordParser, type RecordForm } from './parse-records.ts';
import { kindOf, readSource, type SourceFacts, type SourceKind } from './read-source.ts';
import { UnreadableFileError } from './unreadable-file.ts';

/** What is known of one column after the whole file was looked at. No value leaves this computer. */
export interface ColumnSurvey extends ColumnSketch {
  index: number;
  filled: number;
  /** Why it may not be mapped. */
  identifier: { kind: IdentifierKind; from: 'header' | 'values' } | null;
  dateOrder: DateOrderVerdict;
  /** Dates that fit the other order only. */
  contraryDates: number;
  /** Its different values with their numbers of rows, if they are few. */
  values: { value: string; rows: number }[] | null;
}

export interface FileSurvey {
  kind: SourceKind;
  facts: SourceFacts;
  encoding: Encoding;
  form: RecordForm;
  rows: number;
  columns: ColumnSurvey[];
}

/** A column with more different values is no list of areas, dispositions or answers. */
const mostChoices = 100;
const rowsToJudge = 500;
const dateOnly = /^\d{1,2}[-/.]\d{1,2}[-/.]\d{2,4}$/;
const mostScreened = 3000;

/**
 * Looks through a whole file once: its form, and for each column whether it holds times or a few words,
 * which way round its dates are, and whether it could identify a patient.
 * @param known texts that need no screening: the site's own area names
 * @param now UTC seconds
 * @throws UnreadableFileError with a message for the person
 */
export async function surveyFile(
  file: Blob,
  known: ReadonlySet<string>,
  now: number,
  onBytes: (bytes: number) => void,
): Promise<FileSurvey> {
  if (file.size === 0)
    throw new UnreadableFileError('The file is empty. Choose a file with a header row and at least one visit.');
  const kind = await kindOf(file);
  try {
    return await surveyAs(file, { kind, encoding: 'utf-8' }, known, now, onBytes);
  } catch (error) {
    if (!(error instanceof WrongEncodingError)) throw error;
    // JSON is UTF-8 by its own standard.
    if (kind === 'encounters')
      throw new UnreadableFileError('The file is not encoded in UTF-8, which JSON is. Export the Encounters again.');
    return surveyAs(file, { kind, encoding: 'windows-1252' }, known, now, onBytes);
  }
}

async function surveyAs(
  file: Blob,
  source: { kind: SourceKind; encoding: Encoding },
  known: ReadonlySet<string>,
  now: number,
  onBytes: (bytes: number) => void,
): Promise<FileSurvey> {
  let form: RecordForm | null = source.kind === 'text' ? null : { delimiter: ',', newline: '\n' };
  let columns: ColumnStudy[] | null = null;
  let rest = '';
  let rows = 0;
  const take = (text: string, isLast: boolean): boolean => {
    if (text.includes('\0'))
      throw new UnreadableFileError(
        'The file holds bytes that no text has (NUL): it is not a CSV file, or it was damaged.',
      );
    rest += text;
    form ??= findRecordForm(rest);
    const { records, consumed, openQuote } = makeRecordParser(form)(rest, isLast);
    if (isLast && openQuote) records.pop();
    for (const record of records) {
      if (record.length === 1 && record[0].trim() === '') continue;
      if (columns === null) {
        checkHeader(record);
        columns = record.map(
          (header, index) => new ColumnStudy(header.replace(/^\uFEFF/, '').trim(), index, known, now),
        );
        continue;
      }
      rows += 1;
      // A row of another width is a problem row of the check; its fields may stand under the wrong headers.
      if (record.length !== columns.length) continue;
      for (let index = 0; index < record.length; index += 1) columns[index].add(record[index]);
    }
    rest = rest.slice(consumed);
    if (isLast ? openQuote : rest.length > longestRecord) {
      const where = columns === null ? 'the header' : `row ${String(rows + 1)}`;
      throw new UnreadableFileError(
        openQuote || rest.includes('"')
          ? `A quotation mark is opened at or after ${where} and never closed. Correct it and export again.`
          : `There is a line longer than ${longestRecord.toLocaleString('en')} characters at ${where}: this is not a visit log.`,
      );
    }
    return true;
  };
  const facts = await readSource(file, source, (text) => take(text, false), onBytes);
  take('', true);
  const studied = columns as ColumnStudy[] | null;
  if (studied === null || form === null)
    throw new UnreadableFileError('The file is empty. Choose a file with a header row and at least one visit.');
  if (rows === 0) throw new UnreadableFileError('The file has a header but no visits under it.');
  return {
    kind: source.kind,
    facts,
    encoding: source.encoding,
    form,
    rows,
    columns: studied.map((column) => column.survey()),
  };
}

function checkHeader(record: readonly string[]): void {
  if (record.length > 500)
    throw new UnreadableFileError(
      `The header has ${String(record.length)} columns. Leave out what is not needed; 500 can be shown at most.`,
    );
  if (record.length === 1) {
    throw new UnreadableFileError(
      'Only one column was found. A visit log has at least the arrival and the care area, in columns set off by commas, semicolons, tabs or bars.',
    );
  }
}

/** Gathers what one column holds, at little cost a value. */
class ColumnStudy {
  private readonly header: string;
  private readonly index: number;
  private readonly known: ReadonlySet<string>;
  private readonly now: number;
  private readonly order = new DateOrderTally();
  private values: Map<string, number> | null = new Map();
  private readonly screened = new Map<IdentifierKind, number>();
  private filled = 0;
  private judged = 0;
  private times = 0;

  constructor(header: string, index: number, known: ReadonlySet<string>, now: number) {
    this.header = header;
    this.index = index;
    this.known = known;
    this.now = now;
  }

  add(field: string): void {
    const value = field.trim();
    if (value === '') return;
    this.filled += 1;
    if (this.judged < rowsToJudge) {
      this.judged += 1;
      if (isTime(value)) this.times += 1;
    }
    if (this.isTime) this.order.add(value);
    else {
      // Hourly counts have dates without a time of day.
      if (dateOnly.test(value)) this.order.add(value);
      if (this.filled <= mostScreened) this.screen(value);
    }
    if (this.values === null) return;
    const seen = this.values.get(value);
    if (seen !== undefined) this.values.set(value, seen + 1);
    else if (this.values.size < mostChoices) this.values.set(value, 1);
    else this.values = null;
  }

  private get isTime(): boolean {
    return this.times * 2 > this.judged;
  }

  private screen(value: string): void {
    if (this.known.has(value)) return;
    const finding = findIdentifier(value, this.now);
    if (finding) this.screened.set(finding.kind, (this.screened.get(finding.kind) ?? 0) + 1);
  }

  survey(): ColumnSurvey {
    const { header, index, filled, isTime: holdsTimes } = this;
    const values =
      holdsTimes || this.values === null ? null : [...this.values].map(([value, rows]) => ({ value, rows }));
    values?.sort((a, b) => b.rows - a.rows);
    const identifier = this.identifier(values);
    return {
      index,
      header,
      filled,
      isTime: holdsTimes,
      isChoice: values !== null && filled > 0,
      isBarred: identifier !== null,
      identifier,
      dateOrder: this.order.verdict(),
      contraryDates: this.order.contrary,
      values: identifier === null ? values : null,
    };
  }

  private identifier(values: { value: string; rows: number }[] | null): ColumnSurvey['identifier'] {
    const fromHeader = screenHeader(this.header, this.now);
    if (fromHeader !== null) return { kind: fromHeader, from: 'header' };
    for (const { value, rows } of values ?? []) {
      const finding = this.known.has(value) ? null : findIdentifier(value, this.now);
      if (finding && (finding.certainty === 'sure' || rows < rareBelow)) return { kind: finding.kind, from: 'values' };
    }
    // Too many values to look at each: they are not for mapping, and the first thousands say what they are.
    if (values === null && !this.isTime) {
      const most = [...this.screened].sort((a, b) => b[1] - a[1]).at(0);
      if (most && most[1] * 10 > Math.min(this.filled, mostScreened)) return { kind: most[0], from: 'values' };
    }
    return null;
  }
}

function isTime(value: string): boolean {
  return (
    !Number.isNaN(parseInstant(value)) ||
    !Number.isNaN(readLocalTime(value, 'day first')) ||
    !Number.isNaN(readLocalTime(value, 'month first'))
  );
}
