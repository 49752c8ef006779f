import { once } from 'node:events';
import { MessageChannel } from 'node:worker_threads';
import type { EntityManager } from 'typeorm';
import type { FileOutcome } from '../../../shared/domain/visit-file.ts';
import type { Dependencies } from '../../dependencies.ts';
import type { CareArea } from '../../entities/CareArea.ts';
import { VisitLog } from '../../entities/VisitLog.ts';
import { workerUrl } from '../../simulation/pool.ts';
import type { ReadVisitLogInput, RowsMessage } from './read-visit-log.worker.ts';

/** Table and columns after the log's number, in the order of the cells. */
const targets = {
  visits: {
    table: 'visit',
    columns: [
      ...['rowNumber', 'areaCode', 'arrivalAt', 'bedSpaceAt', 'admissionDecisionAt', 'departureAt'],
      ...['disposition', 'byAmbulance'],
    ],
  },
  'hourly counts': { table: 'hourly_count', columns: ['rowNumber', 'areaCode', 'localHour', 'arrivals', 'departures'] },
} as const;
/** Rows of one statement: half the time a row of a statement for each, and of JSON taken apart by SQLite. */
const rowsAStatement = 50;

/** Inserts a piece, unless the log is no longer loading. */
async function insertPiece(
  manager: EntityManager,
  { table, columns }: (typeof targets)[keyof typeof targets],
  logNumber: number,
  { cells, rows }: RowsMessage,
): Promise<void> {
  if (!(await manager.existsBy(VisitLog, { number: logNumber, status: 'loading' }))) return;
  const width = columns.length;
  const names = ['logNumber', ...columns].map((column) => `"${column}"`).join(', ');
  const places = `(${['logNumber', ...columns].map(() => '?').join(', ')})`;
  for (let from = 0; from < rows; from += rowsAStatement) {
    const to = Math.min(rows, from + rowsAStatement);
    const values: (number | null)[] = [];
    for (let row = from; row < to; row += 1) {
      values.push(logNumber);
      for (let at = row * width; at < (row + 1) * width; at += 1) {
        values.push(Number.isNaN(cells[at]) ? null : cells[at]);
      }
    }
    const each = Array.from({ length: to - from }, () => places).join(', ');
    await manager.query(`INSERT INTO "${table}" (${names}) VALUES ${each}`, values);
  }
}

/**
 * Parses a file on a thread and writes its good rows in short transactions, a thousand each. The
 * thread waits while the database is behind, so memory does not grow with the file.
 * Writes nothing once the log is no longer loading: it may be cancelled between two pieces.
 * @param now the clock at which the file was checked, so that it is judged the same
 * @param onRows told how many rows are written so far
 */
export async function loadRows(
  deps: Dependencies,
  task: {
    file: string;
    now: number;
    areas: readonly CareArea[];
    timeZone: string;
    logNumber: number;
    kind: VisitLog['kind'];
  },
  signal: AbortSignal,
  onRows: (rows: number) => void,
): Promise<FileOutcome> {
  const target = targets[task.kind];
  const { port1: near, port2: far } = new MessageChannel();
  const stop = new AbortController();
  let failure: { error: unknown } | null = null;
  let written = 0;
  let tail: Promise<void> = Promise.resolve();
  near.on('message', (piece: RowsMessage) => {
    tail = tail
      .then(async () => {
        if (failure || signal.aborted) return;
        await deps.database.write((manager) => insertPiece(manager, target, task.logNumber, piece), { unseen: true });
        written += piece.rows;
        onRows(written);
        near.postMessage(null);
      })
      .catch((error: unknown) => {
        failure ??= { error };
        stop.abort();
      });
  });
  try {
    const input: ReadVisitLogInput = {
      file: task.file,
      now: task.now,
      areas: task.areas.map(({ id, name, code }) => ({ id, name, code })),
      timeZone: task.timeZone,
      port: far,
      study: null,
    };
    const outcome = await deps.pool.run<FileOutcome>(workerUrl(import.meta.url, 'read-visit-log.worker'), input, {
      signal: AbortSignal.any([signal, stop.signal]),
      transferList: [far],
    });
    await tail;
    return outcome;
  } catch (error) {
    await tail;
    throw (failure as { error: unknown } | null)?.error ?? error;
  } finally {
    const closed = once(near, 'close');
    near.close();
    await closed;
  }
}

const rowsADelete = 2000;

/** Deletes the visits or counts of a log in short writes, so that other work goes on between them. */
export async function deleteRows(
  deps: Dependencies,
  logNumber: number,
  onRows?: (rows: number) => void,
): Promise<void> {
  let deleted = 0;
  for (;;) {
    const rows = await deps.database.write(async (manager) => {
      for (const table of ['visit', 'hourly_count']) {
        const gone = await manager.query<{ rowNumber: number }[]>(
          `DELETE FROM "${table}" WHERE "logNumber" = ? AND "rowNumber" <= (SELECT MAX("rowNumber") FROM (SELECT "rowNumber" FROM "${table}" WHERE "logNumber" = ? ORDER BY "rowNumber" LIMIT ?)) RETURNING "rowNumber"`,
          [logNumber, logNumber, rowsADelete],
        );
        if (gone.length > 0) return gone.length;
      }
      return 0;
    });
    if (rows === 0) return;
    deleted += rows;
    onRows?.(deleted);
  }
}
