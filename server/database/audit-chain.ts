import { createHash, randomBytes, timingSafeEqual } from 'node:crypto';
import { setImmediate as nextTurn } from 'node:timers/promises';

/** What stands before the first row. */
export const chainStart = '0'.repeat(64);

/** The columns of an audit row that its digest covers. */
export interface ChainedRow {
  id: number;
  at: number;
  personId: string | null;
  actor: string;
  siteId: string | null;
  event: string;
  subject: string;
  detail: string;
  address: string | null;
  requestId: string | null;
  noteHash: string | null;
  previousHash: string;
}

/** SHA-256 of a row with the digest of the row before it, hexadecimal. The leading 1 is the form's version. */
export function hashAuditRow(row: ChainedRow): string {
  const { id, at, personId, actor, siteId, event, subject, detail, address, requestId, noteHash, previousHash } = row;
  const parts = [1, id, at, personId, actor, siteId, event, subject, detail, address, requestId, noteHash];
  return createHash('sha256')
    .update(JSON.stringify([...parts, previousHash]))
    .digest('hex');
}

/** A salt and the salted digest of a note's text. */
export function hashNote(
  text: string,
  salt = randomBytes(16).toString('base64url'),
): { salt: string; noteHash: string } {
  return { salt, noteHash: createHash('sha256').update(`${salt}\n${text}`).digest('hex') };
}

/** What is wrong at the first row that does not fit. */
export type ChainFault =
  'row altered' | 'row missing before' | 'rows missing at the end' | 'note altered' | 'note missing';

export interface ChainCheck {
  whole: boolean;
  /** Rows that were read. */
  rows: number;
  /** Digest of the newest row: written down elsewhere, it proves later that nothing before it changed. */
  head: string;
  fault: { eventId: number; kind: ChainFault } | null;
}

/** What reads the trail: an entity manager, or a connection of one's own. */
interface ChainReader {
  query<Rows>(sql: string, values?: unknown[]): Promise<Rows>;
}

interface StoredRow extends ChainedRow {
  hash: string;
  noteId: number | null;
  salt: string | null;
  text: string | null;
  redactedAt: number | null;
}

const batch = 400;

/**
 * Reads the whole audit trail and computes every digest again. Between batches the event loop has its turn.
 * Cost: about 15 µs a row.
 */
export async function verifyAuditChain(read: ChainReader): Promise<ChainCheck> {
  let previous = chainStart;
  let rows = 0;
  let last = 0;
  const broken = (eventId: number, kind: ChainFault): ChainCheck => ({
    whole: false,
    rows,
    head: previous,
    fault: { eventId, kind },
  });
  for (;;) {
    const stored = await read.query<StoredRow[]>(
      `SELECT event.*, note.eventId AS noteId, note.salt, note.text, note.redactedAt
         FROM audit_event event LEFT JOIN audit_note note ON note.eventId = event.id
        WHERE event.id > ? ORDER BY event.id LIMIT ?`,
      [last, batch],
    );
    for (const row of stored) {
      if (row.previousHash !== previous) return broken(row.id, 'row missing before');
      if (hashAuditRow(row) !== row.hash) return broken(row.id, 'row altered');
      const note = noteFault(row);
      if (note !== null) return broken(row.id, note);
      previous = row.hash;
      last = row.id;
      rows += 1;
    }
    if (stored.length < batch) break;
    await nextTurn();
  }
  // SQLite remembers the highest id that it ever gave out: rows cut off at the end show by it.
  const [given] = await read.query<{ seq: number }[]>(`SELECT seq FROM sqlite_sequence WHERE name = 'audit_event'`);
  const highest = (given as { seq: number } | undefined)?.seq ?? 0;
  if (highest > last) return broken(highest, 'rows missing at the end');
  return { whole: true, rows, head: previous, fault: null };
}

function noteFault(row: StoredRow): ChainFault | null {
  if (row.noteHash === null) return row.noteId === null ? null : 'note altered';
  if (row.noteId === null) return 'note missing';
  if (row.redactedAt !== null) return null;
  const computed = Buffer.from(hashNote(row.text ?? '', row.salt ?? '').noteHash);
  const stored = Buffer.from(row.noteHash);
  return computed.length === stored.length && timingSafeEqual(computed, stored) ? null : 'note altered';
}
