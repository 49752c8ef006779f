import type { EntityManager } from 'typeorm';
import { AuditEvent } from '../entities/AuditEvent.ts';
import { actorOf } from './actor.ts';
import type { RouteContext } from './route.ts';

/** The part of a route's context that an audit row needs. */
export type AuditSource = Pick<RouteContext, 'caller' | 'site' | 'now' | 'requestId' | 'address'> &
  Partial<Pick<RouteContext, 'token'>>;

/**
 * Adds an audit row in the same transaction as the change that it tells of.
 * @param event for instance 'visit-log.uploaded'
 * @param subject id of the record concerned
 * @param detail counts and settings; never a note's text, never a row value
 */
export async function recordAudit(
  manager: EntityManager,
  source: AuditSource,
  event: string,
  subject: string,
  detail: Record<string, unknown> = {},
): Promise<void> {
  await manager.insert(AuditEvent, {
    at: source.now,
    personId: source.caller?.person.id ?? null,
    actor: actorOf(source)?.name ?? 'nobody signed in',
    siteId: source.site?.id ?? null,
    event,
    subject,
    detail: JSON.stringify(source.token ? { ...detail, tokenId: source.token.id } : detail),
    address: source.address,
    requestId: source.requestId,
  });
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
  await manager.insert(AuditEvent, {
    ...row,
    personId: null,
    detail: JSON.stringify(row.detail ?? {}),
    address: null,
    requestId: null,
  });
}
