import { createHash } from 'node:crypto';
import type { Express } from 'express';
import { endOwnSession, listOwnSessions } from '../../../shared/api/session.ts';
import type { Dependencies } from '../../dependencies.ts';
import { conflict, notFound } from '../../errors.ts';
import { recordAudit } from '../../http/audit.ts';
import { addRoute, type RouteTable } from '../../http/route.ts';
import type { SessionStore } from '../../http/session-store.ts';

/** Names a session without giving away the token that opens it. */
function nameOf(sid: string): string {
  return createHash('sha256').update(`own session ${sid}`).digest('base64url').slice(0, 22);
}

/** Where a person is signed in, each of them to be ended (OWASP ASVS 5.0, 7.5.2). */
export function addOwnSessionRoutes(app: Express, table: RouteTable, deps: Dependencies, sessions: SessionStore): void {
  const idleSeconds = deps.config.idleMinutes * 60;

  addRoute(app, table, deps, listOwnSessions, async ({ caller, req }) => {
    const standing = await sessions.listOf(caller?.person.id ?? '');
    return {
      sessions: standing
        .map(({ sid, session }) => {
          const usedAt = session.usedAt ?? session.signedInAt;
          return {
            id: nameOf(sid),
            device: session.device ?? 'A browser',
            address: session.address ?? '',
            signedInAt: session.signedInAt,
            // Locked by hand: its last use is not known any more.
            usedAt: Math.max(usedAt, session.signedInAt),
            locked: sessions.now() - usedAt > idleSeconds,
            current: sid === req.sessionID,
          };
        })
        .toSorted((a, b) => b.usedAt - a.usedAt),
    };
  });

  addRoute(app, table, deps, endOwnSession, async (context) => {
    const personId = context.caller?.person.id ?? '';
    const found = (await sessions.listOf(personId)).find(({ sid }) => nameOf(sid) === context.params.sessionId);
    if (!found) throw notFound('This session');
    if (found.sid === context.req.sessionID) {
      throw conflict('This is the session that you are using.', 'Sign out to end it.');
    }
    const ended = await sessions.endOne(found.sid, personId, (manager) =>
      recordAudit(manager, context, 'person.session-ended', personId, { device: found.session.device ?? 'A browser' }),
    );
    if (!ended) throw notFound('This session');
    return null;
  });
}
