import { afterEach, describe, expect, it } from 'vitest';
import { followSession, readKeptSession } from '../../../../src/features/sign-in/kept-session.ts';
import type { DeviceSession } from '../../../../src/features/sign-in/kept-session.ts';
import { keepOnDevice, readKept } from '../../../../src/lib/kept-on-device.ts';

const at = 1_796_100_000_000;
const minute = 60_000;

function buildSession(personId: string | null, change: Partial<DeviceSession> = {}): DeviceSession {
  return {
    person: personId === null ? null : { id: personId, name: 'A. Brandt', email: 'a.brandt@farrowmere.example' },
    sites: [],
    locked: false,
    idleSeconds: 900,
    installationRoles: [],
    installationPermissions: [],
    administratorContact: 'the administrator',
    csrfToken: 'token-1',
    now: at / 1000,
    ...change,
  };
}

afterEach(() => localStorage.clear());

describe('what this device keeps of a session', () => {
  it('opens without the server while the session would be open, its clock carried on, without the token', () => {
    followSession(buildSession('ines'), at);
    expect(localStorage.getItem('kept:device:session')).not.toContain('token-1');
    const kept = readKeptSession(at + 10 * minute);
    expect(kept).toMatchObject({ person: { id: 'ines' }, keptAt: at, now: at / 1000 + 600, csrfToken: '' });
  });

  it('is forgotten, with everything that was read, once the screen would have locked itself', () => {
    followSession(buildSession('ines'), at);
    keepOnDevice('ines', 'tonight:general', { figures: 1 }, at);
    // Somebody pressed a key 10 min ago: the 15 min count from then.
    localStorage.setItem('last-use', String(at + 10 * minute));
    expect(readKeptSession(at + 24 * minute)?.person?.id).toBe('ines');
    expect(readKeptSession(at + 26 * minute)).toBeNull();
    expect(readKept('ines', 'tonight:general')).toBeNull();
    expect(localStorage.getItem('kept:device:session')).toBeNull();
  });

  it('is forgotten after a shift, and where the clock was set back, however much the device is used', () => {
    followSession(buildSession('ines'), at);
    localStorage.setItem('last-use', String(at + 13 * 60 * minute));
    expect(readKeptSession(at + 13 * 60 * minute)).toBeNull();
    followSession(buildSession('ines'), at);
    expect(readKeptSession(at - minute)).toBeNull();
  });

  it.each([
    ['nobody is signed in any more', buildSession(null)],
    ['the screen is locked', buildSession(null, { locked: true })],
  ])('is gone when %s', (_name, session) => {
    followSession(buildSession('ines'), at);
    keepOnDevice('ines', 'tonight:general', { figures: 1 }, at);
    followSession(session, at + minute);
    expect(Object.keys(localStorage).filter((key) => key.startsWith('kept:'))).toEqual([]);
  });

  it('is nothing of the person before', () => {
    followSession(buildSession('ines'), at);
    keepOnDevice('ines', 'tonight:general', { figures: 1 }, at);
    followSession(buildSession('dilip'), at + minute);
    expect(readKept('ines', 'tonight:general')).toBeNull();
    expect(readKeptSession(at + 2 * minute)?.person?.id).toBe('dilip');
  });

  it('is not renewed by what the device itself said, and not read in another form', () => {
    followSession(buildSession('ines', { keptAt: at }), at);
    expect(readKeptSession(at)).toBeNull();
    keepOnDevice('device', 'session', { person: 'ines' }, at);
    expect(readKeptSession(at)).toBeNull();
  });
});
