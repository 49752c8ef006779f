import { closeSync, openSync, readSync } from 'node:fs';
import type { MessagePort } from 'node:worker_threads';
import { canonicalCountPlaces, canonicalCountReading, isCountHeader } from '../../../shared/domain/canonical-count.ts';
import { canonicalPlaces, canonicalReading } from '../../../shared/domain/canonical-visit.ts';
import type { TimeSpan } from '../../../shared/domain/file-study.ts';
import { notText, notUtf8 } from '../../../shared/domain/sniff-file.ts';
import { VisitFileReader, type FileOutcome } from '../../../shared/domain/visit-file.ts';
import { notRecorded } from '../../../shared/domain/visit-row.ts';
import { makeZone } from '../../../shared/domain/zoned-time.ts';
import { makeRecordParser } from './parse-records.ts';

/** What the thread is given. */
export interface ReadVisitLogInput {
  file: string;
  /** UTC seconds. */
  now: number;
  areas: { id: string; name: string; code: number }[];
  timeZone: string;
  /** Gets good rows in pieces and answers each with anything; null to check only. */
  port: MessagePort | null;
  /** What a study of the times needs; null for none. */
  study: { shiftEnds: number[]; covered: TimeSpan[] } | null;
}

/**
 * One piece of good rows, cell by cell, NaN for what is not recorded: [rowNumber, areaCode, arrival, bed space, admission
 * decision, departure, disposition, byAmbulance]; of hourly counts [rowNumber, areaCode, localHour, arrivals, departures].
 */
export interface RowsMessage {
  cells: Float64Array;
  rows: number;
}

const visitCells = 8;
const countCells = 5;

const pieceBytes = 1 << 20;
/** Each piece is one write on the main thread: 1,000 rows hold it for some milliseconds. */
const rowsAMessage = 1000;
/** More than a piece of the file holds: the main thread writes while this one reads the next. */
const mostUnanswered = 32;

/** Reads a file that stands on the disk, checks every row, and hands on the good ones. */
export default async function readVisitLog({
  file,
  now,
  areas,
  timeZone,
  port,
  study,
}: ReadVisitLogInput): Promise<FileOutcome> {
  const codes = new Map<string, number>();
  for (const area of areas) codes.set(area.name, area.code);
  for (const area of areas) codes.set(area.id, area.code);
  const out = port ? new RowsOut(port) : null;
  const zone = makeZone(timeZone);
  let counts = 0;
  const reader = new VisitFileReader({
    parse: makeRecordParser(),
    places: (header) => (isCountHeader(header) ? canonicalCountPlaces(header, now) : canonicalPlaces(header, now)),
    reading: canonicalReading(codes),
    now,
    ...(study ? { study: { ...study, zone } } : {}),
    counts: {
      reading: canonicalCountReading(codes),
      zone,
      // A system that leaves hours out may have lost them: it has to say 0.
      missingIsNone: false,
      areaName: (code) => areas.find((area) => area.code === code)?.name ?? '',
      onCount: ({ area, localHour, arrivals, departures }) => {
        counts += 1;
        out?.add(countCells, [counts, area, localHour, arrivals, departures ?? NaN]);
      },
    },
    ...(out
      ? {
          onVisit: (visit, rowNumber) => {
            const { area, arrivalAt, bedSpaceAt, admissionDecisionAt, departureAt } = visit;
            const codes = [known(visit.disposition), known(visit.byAmbulance)];
            out.add(visitCells, [rowNumber, area, arrivalAt, bedSpaceAt, admissionDecisionAt, departureAt, ...codes]);
          },
        }
      : {}),
  });
  const outcome = await readAll(file, reader, out);
  await out?.finish();
  return outcome;
}

const known = (code: number) => (code === notRecorded ? NaN : code);

async function readAll(file: string, reader: VisitFileReader, out: RowsOut | null): Promise<FileOutcome> {
  const refuse = (message: string): FileOutcome => ({ refused: [{ at: 'file', message }], identifying: false });
  const decoder = new TextDecoder('utf-8', { fatal: true, ignoreBOM: false });
  const handle = openSync(file, 'r');
  try {
    const piece = new Uint8Array(pieceBytes);
    for (let first = true; ; first = false) {
      const bytes = piece.subarray(0, readSync(handle, piece, 0, pieceBytes, null));
      if (first) {
        const reason = notText(bytes);
        if (reason !== null) return refuse(reason);
      }
      let text: string;
      try {
        text = decoder.decode(bytes, { stream: bytes.length > 0 });
      } catch {
        return refuse(notUtf8);
      }
      if (!reader.push(text) || bytes.length === 0) return reader.end();
      await out?.room();
    }
  } finally {
    closeSync(handle);
  }
}

/** Sends rows on in pieces and waits while too many are unanswered, so that memory stays small. */
class RowsOut {
  private readonly port: MessagePort;
  private cells = new Float64Array(0);
  private rows = 0;
  private waiting: RowsMessage[] = [];
  private unanswered = 0;
  private wake: (() => void) | null = null;

  constructor(port: MessagePort) {
    this.port = port;
    port.on('message', () => {
      this.unanswered -= 1;
      this.send();
      this.wake?.();
    });
  }

  /** @param width cells of every row of this file. */
  add(width: number, row: readonly number[]): void {
    if (this.rows === 0) this.cells = new Float64Array(width * rowsAMessage);
    this.cells.set(row, this.rows * width);
    this.rows += 1;
    if (this.rows === rowsAMessage) this.pass(width);
  }

  /** Resolves once all that was added is sent or nearly so. */
  async room(): Promise<void> {
    while (this.waiting.length > 0) await this.answer();
  }

  async finish(): Promise<void> {
    if (this.rows > 0) this.pass(this.cells.length / rowsAMessage);
    while (this.waiting.length > 0 || this.unanswered > 0) await this.answer();
    this.port.close();
  }

  private pass(width: number): void {
    this.waiting.push({ cells: this.cells.slice(0, this.rows * width), rows: this.rows });
    this.rows = 0;
    this.send();
  }

  private send(): void {
    while (this.unanswered < mostUnanswered) {
      const message = this.waiting.shift();
      if (!message) return;
      this.unanswered += 1;
      this.port.postMessage(message, [message.cells.buffer as ArrayBuffer]);
    }
  }

  private answer(): Promise<void> {
    return new Promise((resolve) => {
      this.wake = resolve;
    });
  }
}
