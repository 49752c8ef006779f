import type { FileFault } from './file-fault.ts';
import { FileStudyBuilder, type FileStudy, type StudyOptions } from './file-study.ts';
import {
  countColumnNames,
  type CountedFile,
  type CountPlaces,
  type CountReading,
  type HourlyCount,
} from './hourly-count.ts';
import { HourlyCountReader, mostCountRows } from './hourly-count-reader.ts';
import { instantsOfLocalHour } from './local-hour-span.ts';
import { withArticle, type IdentifierKind } from './identifier-kind.ts';
import type { ProblemRows } from './problem-rows.ts';
import { VisitReportBuilder, type VisitReport } from './visit-report.ts';
import {
  notRecorded,
  visitColumnNames,
  VisitRowReader,
  type ColumnPlaces,
  type VisitReading,
  type VisitRow,
} from './visit-row.ts';
import type { Zone } from './zoned-time.ts';

export type { FileFault } from './file-fault.ts';

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
  | {
      refused: null;
      report: VisitReport;
      problemRows: ProblemRows[];
      study: FileStudy | null;
      /** What a file of hourly counts holds; null for one of visits. */
      counted: CountedFile | null;
    };

export interface VisitFileOptions {
  parse: ParseRecords;
  /** Finds the columns in the header, or says what is wrong with it. */
  places(
    header: string[],
  ): { places: ColumnPlaces } | { countPlaces: CountPlaces } | { faults: FileFault[]; identifying: boolean };
  reading: VisitReading;
  /** UTC seconds. */
  now: number;
  /** Asks for a study of the good rows' times; none if left out. */
  study?: StudyOptions;
  /** Gets every good row with its number, 1 for the first row after the header. */
  onVisit?: (visit: VisitRow, rowNumber: number) => void;
  /** What reading hourly counts stands on; a file of counts is refused without it. */
  counts?: {
    reading: CountReading;
    zone: Zone;
    missingIsNone: boolean;
    areaName(area: number): string;
    /** Gets every hour of every area once the whole file was found to be good. */
    onCount?: (count: HourlyCount) => void;
  };
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
  private hourly: HourlyCountReader | null = null;
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
    if (!this.refused && this.rows === null && this.hourly === null)
      this.refuse('file', 'The file is empty. Choose a file with a header row and at least one visit.');
    if (!this.refused && this.hourly) return this.endCounts(this.hourly);
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
      : {
          refused: null,
          report,
          problemRows: this.builder.problemRows(),
          study: this.study?.study() ?? null,
          counted: null,
        };
  }

  /** The end of a file of hourly counts: any fault refuses all of it. */
  private endCounts(hourly: HourlyCountReader): FileOutcome {
    const found = hourly.identifiers();
    if (found.length > 0) {
      return {
        refused: found.map(({ column, kind, rows }) =>
          identifierFault(`column ${column} (${countColumnNames[column]})`, kind, rows),
        ),
        identifying: true,
      };
    }
    const refuse = (faults: FileFault[]): FileOutcome => ({ refused: faults, identifying: false });
    if (hourly.rows === 0) return refuse([{ at: 'file', message: 'The file has a header but no hours under it.' }]);
    const { counts } = this.options;
    const arrivalsOnly = { bedSpaceAt: NaN, admissionDecisionAt: NaN, departureAt: NaN };
    let rows = 0;
    const outcome = hourly.finish((count) => {
      rows += 1;
      counts?.onCount?.(count);
      if (!this.study || !counts || count.arrivals === 0) return;
      const { from } = instantsOfLocalHour(counts.zone, count.localHour);
      const visit = {
        area: count.area,
        arrivalAt: from,
        ...arrivalsOnly,
        disposition: notRecorded,
        byAmbulance: notRecorded,
      };
      for (let n = 0; n < count.arrivals; n += 1) this.study.add(visit);
    });
    if ('faults' in outcome) return refuse(outcome.faults);
    const { counted } = outcome;
    const zone = counts?.zone;
    const visits = counted.areas.reduce((sum, { arrivals }) => sum + arrivals, 0);
    if (!zone || visits === 0) return refuse([{ at: 'file', message: 'No hour of the file has an arrival.' }]);
    const last = instantsOfLocalHour(zone, counted.lastLocalHour).to;
    const study = this.study?.study() ?? null;
    return {
      refused: null,
      report: {
        rows,
        goodRows: rows,
        problemRows: 0,
        problems: [],
        identicalRows: 0,
        firstArrivalAt: instantsOfLocalHour(zone, counted.firstLocalHour).from,
        lastArrivalAt: last - 1,
        lastTimeAt: last,
        visitsByArea: counted.areas.map(({ area, arrivals }) => ({ area, visits: arrivals })),
        recorded: { departure: 0, bedSpace: 0, admissionDecision: 0, disposition: 0, byAmbulance: 0 },
      },
      problemRows: [],
      // Minutes are not known, so none can be heaped.
      study: study && { ...study, heaps: [] },
      counted,
    };
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
    const read = this.hourly?.rows ?? this.rowsRead;
    const row = this.rows === null && this.hourly === null ? 'the header' : `row ${String(read + 1)}`;
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
    if (this.hourly) {
      this.hourly.read(record, this.width);
      if (this.hourly.rows > mostCountRows) {
        this.refuse(
          'file',
          `The file has more than ${mostCountRows.toLocaleString('en')} rows: these are no hourly counts.`,
        );
      }
      return;
    }
    if (this.rows === null) {
      const header = record.map((name, index) => (index === 0 ? name.replace(/^\uFEFF/, '') : name).trim());
      const found = this.options.places(header);
      if ('faults' in found) {
        this.refused = found;
        return;
      }
      this.width = record.length;
      if ('countPlaces' in found) {
        const { counts, now } = this.options;
        if (counts) this.hourly = new HourlyCountReader({ places: found.countPlaces, now, ...counts });
        else this.refuse('file', 'The file holds hourly counts, not visits.');
        return;
      }
      this.rows = new VisitRowReader(found.places, this.options.reading, this.options.now, this.builder);
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
