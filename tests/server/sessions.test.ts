import { afterAll, beforeAll, beforeEach, describe, expect, test, vi } from 'vitest';
import type { Problem } from '../../shared/api/common.ts';
import type { Session } from '../../shared/api/session.ts';
import { AuditEvent } from '../../server/entities/AuditEvent.ts';
import { SessionRow } from '../../server/entities/SessionRow.ts';
import { SessionStore } from '../../server/http/session-store.ts';
import type { Person } from '../../server/entities/Person.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

/*
 * What OWASP ASVS 5.0 asks of sessions in chapter 7 (inactivity, absolute lifetime, termination), with the product's own
 * figures: 15 minutes of no use, 12 hours in all.
 */
let server: TestServer;
let built: BuiltSite;
let person: Person;
let client: SignedIn;
let sid: string;

beforeAll(async () => {
  server = await openTestServer();
  built = await buildSite(server.deps.database);
  person = await buildPerson(server.deps.database, [{ role: 'charge', siteId: built.site.id }]);
});
afterAll(() => server.close());
beforeEach(async () => {
  client = await server.signedInAs(person.id);
  sid = /s%3A(\w+)/.exec(client.cookie)?.[1] ?? '';
});

const path = () => `/api/sites/${built.site.id}`;
const row = () => server.deps.database.read.findOneByOrFail(SessionRow, { sid });
const stored = async () => JSON.parse((await row()).data) as { usedAt?: number };
/** As if the last use had been so long ago. */
async function leaveAlone(seconds: number): Promise<void> {
  const data = { ...(JSON.parse((await row()).data) as object), usedAt: server.sessions.now() - seconds };
  await server.deps.database.write((manager) =>
    manager.update(SessionRow, { sid }, { data: JSON.stringify(data), personId: person.id }),
  );
}
const session = async () => (await client.get('/api/session')).body as Session;

describe('a session that nobody uses', () => {
  test('locks after 15 minutes: reading and writing are refused, the question says so, nothing opens it again', async () => {
    await leaveAlone(14 * 60);
    expect((await client.get(path())).status).toBe(200);
    await leaveAlone(15 * 60 + 2);
    const refused = await client.get(path()).set('x-use', '1');
    expect(refused.status).toBe(401);
    expect((refused.body as Problem).title).toBe('Locked');
    expect((await client.send('post', `${path()}/censuses`, {})).status).toBe(401);
    expect(await session()).toMatchObject({ person: null, sites: [], locked: true, idleSeconds: 900 });
    expect((await client.get(path()).set('x-use', '1')).status).toBe(401);
  });

  test('is not kept awake by a page that asks by itself, but by a person’s key or pointer', async () => {
    await leaveAlone(10 * 60);
    const before = (await stored()).usedAt;
    for (let i = 0; i < 5; i += 1) await client.get(path());
    expect((await stored()).usedAt).toBe(before);
    await client.get(path()).set('x-use', '1');
    expect((await stored()).usedAt).toBeGreaterThanOrEqual(server.sessions.now() - 5);
    const noted = (await stored()).usedAt;
    await client.get(path()).set('x-use', '1');
    expect((await stored()).usedAt).toBe(noted);
  });

  test('can be locked by hand', async () => {
    expect((await client.send('post', '/auth/lock')).status).toBe(204);
    expect((await client.get(path())).status).toBe(401);
    expect(await session()).toMatchObject({ person: null, locked: true });
  });
});

describe('a session that ended', () => {
  test('does not come back with a request that was under way', async () => {
    await leaveAlone(5 * 60);
    const data = JSON.parse((await row()).data) as Parameters<SessionStore['set']>[1];
    await server.sessions.endAllOf(person.id, () => Promise.resolve());
    await new Promise((resolve) => {
      server.sessions.set(sid, data, resolve);
    });
    expect(await server.deps.database.read.existsBy(SessionRow, { sid })).toBe(false);
    expect((await client.get(path())).status).toBe(401);
  });

  test('is not one that could not be read: the request fails, and the next one finds the person signed in', async () => {
    // As when the disk does not answer or another program holds the file for a moment.
    vi.spyOn(server.sessions, 'get').mockImplementationOnce((_, done) => {
      done(new Error('the database is locked'));
    });
    const failed = await client.get(path());
    expect(failed.status).toBe(500);
    expect(failed.headers['set-cookie']).toBeUndefined();
    expect((await client.get(path())).status).toBe(200);
    expect(await server.deps.database.read.existsBy(SessionRow, { sid })).toBe(true);
  });

  test('everywhere: every browser of the person, and nobody else’s; it is audited', async () => {
    const elsewhere = await server.signedInAs(person.id);
    const other = await server.signedInAs((await buildPerson(server.deps.database)).id);
    expect((await client.send('post', '/auth/sign-out-everywhere')).body).toEqual({ redirectTo: '/sign-in' });
    for (const each of [client, elsewhere]) expect((await each.get(path())).status).toBe(401);
    expect(((await other.get('/api/session')).body as Session).person).not.toBeNull();
    const event = { event: 'person.signed-out-everywhere', personId: person.id };
    expect(await server.deps.database.read.countBy(AuditEvent, event)).toBe(1);
  });

  test('after its absolute lifetime, however much it was used', async () => {
    let now = 1_000_000;
    const store = new SessionStore(server.deps.database, () => now, 12 * 3600);
    const read = () =>
      new Promise((resolve) => {
        store.get('absolute', (_, found) => {
          resolve(found);
        });
      });
    const write = (usedAt: number) =>
      new Promise((resolve) => {
        const data = { personId: person.id, signedInAt: 1_000_000, usedAt, cookie: {} };
        store.set('absolute', data as Parameters<SessionStore['set']>[1], resolve);
      });
    await write(now);
    for (; now < 1_000_000 + 12 * 3600; now += 600) {
      expect(await read()).toMatchObject({ signedInAt: 1_000_000 });
      await write(now);
    }
    expect(await read()).toBeNull();
  });
});

describe('too many requests', () => {
  let limited: TestServer;
  beforeAll(async () => {
    limited = await openTestServer({ config: { requestsPerMinute: 60 } });
  });
  afterAll(() => limited.close());

  test('of one session are refused; another session behind the same address goes on', async () => {
    const someone = await buildPerson(limited.deps.database);
    const first = await limited.signedInAs(someone.id);
    const second = await limited.signedInAs(someone.id);
    for (let i = 0; i < 60; i += 1) expect((await first.get('/api/session')).status).toBe(200);
    const refused = await first.get('/api/session');
    expect(refused.status).toBe(429);
    expect((refused.body as Problem).next).toBe('Wait a minute and try again.');
    expect((await second.get('/api/session')).status).toBe(200);
    expect((await limited.nobody().get('/api/session')).status).toBe(200);
  });
});
