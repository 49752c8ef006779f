import type { Request, RequestHandler } from 'express';
import type { SessionStore } from './session-store.ts';

/** The moment of use is written at most this often. */
const noteEverySeconds = 60;

const locked = new WeakSet<Request>();

/** True when somebody is signed in here, but the session was not used for too long. */
export function isLocked(req: Request): boolean {
  return locked.has(req);
}

/**
 * Follows when a signed-in person last did something, and locks what was left alone. A page that asks again by
 * itself is no use: the client marks the requests that follow a key or a pointer within a minute, and writing
 * requests count.
 */
export function followUse(sessions: SessionStore, idleSeconds: number): RequestHandler {
  return (req, _res, next) => {
    const { session } = req;
    if (session.personId === undefined) {
      next();
      return;
    }
    const now = sessions.now();
    let usedAt = session.usedAt ?? session.signedInAt ?? 0;
    // The clock was set back: the wait for use begins now, not when the clock has caught up.
    if (usedAt > now + noteEverySeconds) session.usedAt = usedAt = now;
    if (now - usedAt > idleSeconds) locked.add(req);
    else if ((req.get('x-use') === '1' || !['GET', 'HEAD'].includes(req.method)) && now - usedAt >= noteEverySeconds) {
      session.usedAt = now;
    }
    next();
  };
}
