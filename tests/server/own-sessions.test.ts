import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest';
import type { OwnSession } from '../../shared/api/session.ts';
import { AuditEvent } from '../../server/entities/AuditEvent.ts';
import type { Person } from '../../server/entities/Person.ts';
import { nameDevice } from '../../server/features/sign-in/name-device.ts';
import { buildPerson } from '../support/build-site.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

/* OWASP ASVS 5.0, 7.5.2: a person sees their active sessions and can end any of them. */
let server: TestServer;
let person: Person;
let here: SignedIn;
let elsewhere: SignedIn;

beforeAll(async () => {
  server = await openTestServer();
});
afterAll(() => server.close());
beforeEach(async () => {
  person = await buildPerson(server.deps.database);
  here = await server.signedInAs(person.id);
  elsewhere = await server.signedInAs(person.id);
});

const list = async (client = here) => {
  const reply = await client.get('/api/own-sessions');
  expect(reply.status, reply.text).toBe(200);
  return (reply.body as { sessions: OwnSession[] }).sessions;
};
const end = (id: string, client = here) => client.send('post', `/api/own-sessions/${id}/ending`);

describe('one’s own sessions', () => {
  test('are listed, this one marked, without what would open them, and nobody else’s', async () => {
    await server.signedInAs((await buildPerson(server.deps.database)).id);
    const sessions = await list();
    expect(sessions).toHaveLength(2);
    expect(sessions.filter(({ current }) => current)).toHaveLength(1);
    const text = JSON.stringify(sessions);
    for (const { cookie, csrfToken } of [here, elsewhere]) {
      const [sid, signature] = decodeURIComponent(cookie).replace('shoalmark=s:', '').split('.');
      for (const secret of [sid, signature, csrfToken]) expect(text).not.toContain(secret);
    }
  });

  test('can be ended one by one: refused from the next request on, the others go on; it is audited', async () => {
    const [other] = (await list()).filter(({ current }) => !current);
    expect((await end(other.id)).status).toBe(204);
    expect((await elsewhere.get('/api/own-sessions')).status).toBe(401);
    expect(await list()).toHaveLength(1);
    const event = { event: 'person.session-ended', personId: person.id };
    expect(await server.deps.database.read.countBy(AuditEvent, event)).toBe(1);
    expect((await end(other.id)).status).toBe(404);
  });

  test('the one in use is not ended here, and another person’s is not found', async () => {
    const [own] = (await list()).filter(({ current }) => current);
    expect((await end(own.id)).status).toBe(409);
    const stranger = await server.signedInAs((await buildPerson(server.deps.database)).id);
    expect((await end(own.id, stranger)).status).toBe(404);
    expect(await list()).toHaveLength(2);
  });
});

describe('a tampered cookie', () => {
  test.each<[string, (cookie: string) => string]>([
    ['with another signature', (cookie) => `${cookie.slice(0, -3)}AAA`],
    ['without one', (cookie) => cookie.replace(/\..*$/, '')],
    ['of another session under this signature', (cookie) => cookie.replace(/s%3A../, 's%3Aff')],
    ['that is empty', () => 'shoalmark='],
  ])('%s opens nothing', async (_, change) => {
    expect((await here.get('/api/own-sessions')).status).toBe(200);
    const reply = await server.nobody().get('/api/own-sessions').set('cookie', change(here.cookie));
    expect(reply.status).toBe(401);
  });
});

// Headers as current browsers send them (MDN, "User-Agent").
test.each([
  ['Mozilla/5.0 (Windows NT 10.0; Win64; x64; rv:140.0) Gecko/20100101 Firefox/140.0', 'Firefox on Windows'],
  [
    'Mozilla/5.0 (Windows NT 10.0; Win64; x64) AppleWebKit/537.36 (KHTML, like Gecko) Chrome/138.0.0.0 Safari/537.36 Edg/138.0.0.0',
    'Edge on Windows',
  ],
  [
    'Mozilla/5.0 (iPad; CPU OS 18_5 like Mac OS X) AppleWebKit/605.1.15 (KHTML, like Gecko) Version/18.5 Mobile/15E148 Safari/604.1',
    'Safari on an iPhone or iPad',
  ],
  [
    'Mozilla/5.0 (Linux; Android 10; K) AppleWebKit/537.36 (KHTML, like Gecko) Chrome/138.0.0.0 Mobile Safari/537.36',
    'Chrome on Android',
  ],
  ['curl/8.5.0', 'A browser'],
  [undefined, 'A browser'],
])('the device of %s is named %s', (header, name) => {
  expect(nameDevice(header)).toBe(name);
});
