import { session as sessionSchema } from '../../../shared/api/session.ts';
import type { Session } from '../../../shared/api/session.ts';
import { forgetKept, keepOnDevice, readKept } from '../../lib/kept-on-device.ts';
import { sharedLastUse } from '../../lib/last-use.ts';

const device = 'device';
const name = 'session';
/** A night shift with its handovers; after that the device says no more who was here. */
const keepMilliseconds = 12 * 3_600_000;

/** A session, and whether it is only what this device last knew of it. */
export type DeviceSession = Session & {
  /** When the server last confirmed it, this device's clock, milliseconds; absent while the server answers. */
  keptAt?: number;
};

/**
 * Follows what the server says of the session: it stays on this device for as long as it runs, so that what was read
 * can be read again without the server. Nothing stays of anybody else, nor of a session that ended or locked itself.
 */
export function followSession(session: DeviceSession, now: number): void {
  if (session.keptAt !== undefined) return;
  if (!session.person) {
    forgetKept();
    return;
  }
  forgetKept(session.person.id);
  // The token belongs to the page that asked for it.
  keepOnDevice(device, name, { ...session, csrfToken: '' }, now);
}

/** The session that this device last knew of, if it would still be open; else whatever is kept is forgotten. */
export function readKeptSession(now: number): DeviceSession | null {
  const kept = readKept(device, name);
  if (!kept) return null;
  const parsed = sessionSchema.safeParse(kept.value);
  const age = now - kept.at;
  // Without the server nobody can unlock: what would have locked itself by now is not shown to whoever comes.
  if (
    !parsed.success ||
    age < 0 ||
    age > keepMilliseconds ||
    now - Math.max(kept.at, sharedLastUse()) > parsed.data.idleSeconds * 1000
  ) {
    forgetKept();
    return null;
  }
  return { ...parsed.data, now: parsed.data.now + Math.floor(age / 1000), keptAt: kept.at };
}
