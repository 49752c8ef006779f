import { FileStudyBuilder, type FileStudy, type StudyOptions } from './file-study.ts';
import { withArticle, type IdentifierKind } from './identifier-kind.ts';
import type { ProblemRows } from './problem-rows.ts';
import { VisitReportBuilder, type VisitReport } from './visit-report.ts';
import { visitColumnNames, VisitRowReader, type ColumnPlaces, type VisitReading, type VisitRow } from './visit-row.ts';

/** A fault of the whole file: where, and what to do about it. */
export interface FileFault {
  at: string;
  message: string;
}

/** What a parser made of a piece of text: whole records, and how many signs they took. */
export interface ParsedPiece {
  records: string[][];
  consumed: number;
  /** The text ended inside quotation marks. */
  openQuote: boolean;
}

/** Parses comma-separated text (RFC 4180); unless it is the last piece, an unfinished record at its end is left. */
export type ParseRecords = (text: string, isLast: boolean) => ParsedPiece;

export const longestRecord = 100_000;
export const mostRows = 3_000_000;

/** The end of reading a file: refused as a whole, or a report with the numbers of its problem rows. */
export type FileOutcome =
  | { refused: FileFault[]; identifying: boolean }
  | { refused: null; report: VisitReport; problemRows: ProblemRows[]; study: FileStudy | null };

export interface VisitFileOptions {
  parse: ParseRecords;
  /** Finds the columns in the header, or says what is wrong with it. */
  places(header: string[]): { places: ColumnPlaces } | { faults: FileFault[]; identifying: boolean };
  reading: VisitReading;
  /** UTC seconds. */
  now: number;
  /** Asks for a study of the good rows' times; none if left out. */
  study?: StudyOptions;
  /** Gets every good row with its number, 1 for the first row after the header. */
  onVisit?: (visit: VisitRow, rowNumber: number) => void;
}

/**
 * Reads a visit log piece by piece: text in, visits and a report out. It holds one record at most, so a
 * file of any size takes the same memory, and it stops at the first fault that condemns the whole file.
 */
export class VisitFileReader {
  private readonly options: VisitFileOptions;
  private readonly builder: VisitReportBuilder;
  private readonly study: FileStudyBuilder | null;
  private rest = '';
  private width = 0;
  private rowsRead = 0;
  private rows: VisitRowReader | null = null;
  private refused: { faults: FileFault[]; identifying: boolean } | null = null;

  constructor(options: VisitFileOptions) {
    this.options = options;
    this.builder = new VisitReportBuilder(options.now);
    this.study = options.study ? new FileStudyBuilder(options.study) : null;
  }

  /** @returns false once the file is refused: the rest need not be read */
  push(text: string): boolean {
    this.take(text, false);
    return this.refused === null;
  }

  /** Reads what is left and tells the outcome. */
  end(): FileOutcome {
    this.take('', true);
    if (!this.refused && this.rows === null)
      this.refuse('file', 'The file is empty. Choose a file with a header row and at least one visit.');
    const found = this.builder.identifiers();
    if (!this.refused && found.length > 0) {
      return {
        refused: found.map(({ column, kind, rows }) =>
          identifierFault(`column ${column} (${visitColumnNames[column]})`, kind, rows),
        ),
        identifying: true,
      };
    }
    const report = this.builder.report();
    if (!this.refused && report.rows === 0) this.refuse('file', 'The file has a header but no visits under it.');
    return this.refused
      ? { refused: this.refused.faults, identifying: this.refused.identifying }
      : { refused: null, report, problemRows: this.builder.problemRows(), study: this.study?.study() ?? null };
  }

  private refuse(at: string, message: string): void {
    this.refused = { faults: [{ at, message }], identifying: false };
  }

  private take(text: string, isLast: boolean): void {
    if (this.refused) return;
    if (text.includes('\0')) {
      this.refuse(
        'file',
        'The file holds bytes that no text has (NUL): it is not a CSV file, or it was damaged on the way.',
      );
      return;
    }
    this.rest += text;
    if (this.rest === '') return;
    const piece = this.options.parse(this.rest, isLast);
    // What stands after a quotation mark that is never closed is no record.
    if (isLast && piece.openQuote) piece.records.pop();
    for (const record of piece.records) {
      this.takeRecord(record);
      if (this.refused) return;
    }
    this.rest = this.rest.slice(piece.consumed);
    const row = this.rows === null ? 'the header' : `row ${String(this.rowsRead + 1)}`;
    if (isLast ? piece.openQuote : this.rest.length > longestRecord) {
      this.refuse(
        row,
        this.rest.includes('"') || piece.openQuote
          ? `A quotation mark is opened at or after ${row} and never closed. Correct it and export again.`
          : `There is a line longer than ${longestRecord.toLocaleString('en')} characters at ${row}: this is not a visit log.`,
      );
    }
  }

  private takeRecord(record: string[]): void {
    if (record.length === 1 && record[0].trim() === '') return;
    if (this.rows === null) {
      const header = record.map((name, index) => (index === 0 ? name.replace(/^\uFEFF/, '') : name).trim());
      const found = this.options.places(header);
      if ('faults' in found) {
        this.refused = found;
        return;
      }
      this.rows = new VisitRowReader(found.places, this.options.reading, this.options.now, this.builder);
      this.width = record.length;
      return;
    }
    this.rowsRead = this.builder.beginRow();
    if (this.rowsRead > mostRows) {
      this.refuse(
        'file',
        `The file has more than ${mostRows.toLocaleString('en')} rows. Split it by period and load the parts.`,
      );
      return;
    }
    if (record.length !== this.width) {
      this.builder.problem('wrong number of fields', null);
      return;
    }
    const visit = this.rows.read(record);
    if (visit) {
      this.builder.good(visit);
      this.study?.add(visit);
      this.options.onVisit?.(visit, this.rowsRead);
    }
  }
}

/**
 * The words of a refusal for an identifier: the column and the kind, never the value.
 * @param rows how many rows hold it; left out when the header says so
 */
export function identifierFault(at: string, kind: IdentifierKind, rows?: number): FileFault {
  const message =
    rows === undefined
      ? `Its header says that it holds ${withArticle(kind)}. Leave this column out.`
      : `${rows.toLocaleString('en')} ${rows === 1 ? 'row looks' : 'rows look'} like ${withArticle(kind)}. Take it out of the export and try again.`;
  return { at, message };
}
