import type { EntityManager } from 'typeorm';
import { chainStart, hashAuditRow, hashNote } from '../database/audit-chain.ts';
import { AuditEvent } from '../entities/AuditEvent.ts';
import { AuditNote } from '../entities/AuditNote.ts';
import { actorOf } from './actor.ts';
import type { RouteContext } from './route.ts';

/** The part of a route's context that an audit row needs. */
export type AuditSource = Pick<RouteContext, 'caller' | 'site' | 'now' | 'requestId' | 'address'> &
  Partial<Pick<RouteContext, 'token'>>;

type NewEvent = Omit<AuditEvent, 'id' | 'noteHash' | 'previousHash' | 'hash'>;

/**
 * Adds an audit row in the same transaction as the change that it tells of.
 * @param event for instance 'visit-log.uploaded'
 * @param subject id of the record concerned
 * @param detail counts and settings; never a note's text, never a row value
 * @param note a text that the person typed with it: kept apart, where it can be taken out; the row holds its salted digest
 */
export async function recordAudit(
  manager: EntityManager,
  source: AuditSource,
  event: string,
  subject: string,
  detail: Record<string, unknown> = {},
  note: string | null = null,
): Promise<void> {
  await addToChain(
    manager,
    {
      at: source.now,
      personId: source.caller?.person.id ?? null,
      actor: actorOf(source)?.name ?? 'nobody signed in',
      siteId: source.site?.id ?? null,
      event,
      subject,
      detail: JSON.stringify(source.token ? { ...detail, tokenId: source.token.id } : detail),
      address: source.address,
      requestId: source.requestId,
    },
    note,
  );
}

/** The same for what the server does by itself (a job, the timetable). */
export async function recordOwnAudit(
  manager: EntityManager,
  row: {
    at: number;
    actor: string;
    siteId: string | null;
    event: string;
    subject: string;
    detail?: Record<string, unknown>;
  },
): Promise<void> {
  const detail = JSON.stringify(row.detail ?? {});
  await addToChain(manager, { ...row, personId: null, detail, address: null, requestId: null }, null);
}

/** Puts a row after the newest one. Writes go one at a time, and a trigger refuses a row that does not follow. */
async function addToChain(manager: EntityManager, event: NewEvent, note: string | null): Promise<void> {
  const [newest] = await manager.query<{ id: number; hash: string }[]>(
    'SELECT id, hash FROM audit_event ORDER BY id DESC LIMIT 1',
  );
  const before = newest as { id: number; hash: string } | undefined;
  const salted = note === null || note === '' ? null : hashNote(note);
  const row = {
    ...event,
    id: (before?.id ?? 0) + 1,
    noteHash: salted?.noteHash ?? null,
    previousHash: before?.hash ?? chainStart,
  };
  await manager.insert(AuditEvent, { ...row, hash: hashAuditRow(row) });
  if (salted) {
    await manager.insert(AuditNote, {
      eventId: row.id,
      salt: salted.salt,
      text: note,
      redactedAt: null,
      redactedBy: null,
    });
  }
}
