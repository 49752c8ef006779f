import { once } from 'node:events';
import { MessageChannel } from 'node:worker_threads';
import type { FileOutcome } from '../../../shared/domain/visit-file.ts';
import type { Dependencies } from '../../dependencies.ts';
import type { CareArea } from '../../entities/CareArea.ts';
import type { VisitLog } from '../../entities/VisitLog.ts';
import { workerUrl } from '../../simulation/pool.ts';
import type { ReadVisitLogInput, RowsMessage } from './read-visit-log.worker.ts';

const insertVisits = `INSERT INTO "visit" ("logNumber", "rowNumber", "areaCode", "arrivalAt", "bedSpaceAt", "admissionDecisionAt", "departureAt", "disposition", "byAmbulance")
SELECT ?, value ->> 0, value ->> 1, value ->> 2, value ->> 3, value ->> 4, value ->> 5, value ->> 6, value ->> 7 FROM json_each(?)
WHERE EXISTS (SELECT 1 FROM "visit_log" WHERE "number" = ? AND "status" = 'loading')`;
const insertCounts = `INSERT INTO "hourly_count" ("logNumber", "rowNumber", "areaCode", "localHour", "arrivals", "departures")
SELECT ?, value ->> 0, value ->> 1, value ->> 2, value ->> 3, value ->> 4 FROM json_each(?)
WHERE EXISTS (SELECT 1 FROM "visit_log" WHERE "number" = ? AND "status" = 'loading')`;

/**
 * Parses a file on a thread and writes its good rows in short transactions, some thousands each. The
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
  const insert = task.kind === 'visits' ? insertVisits : insertCounts;
  const { port1: near, port2: far } = new MessageChannel();
  const stop = new AbortController();
  let failure: { error: unknown } | null = null;
  let written = 0;
  let tail: Promise<void> = Promise.resolve();
  near.on('message', ({ json, rows }: RowsMessage) => {
    tail = tail
      .then(async () => {
        if (failure || signal.aborted) return;
        await deps.database.write((manager) => manager.query(insert, [task.logNumber, json, task.logNumber]));
        written += rows;
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
    await new Promise((resolve) => setImmediate(resolve));
  }
}
