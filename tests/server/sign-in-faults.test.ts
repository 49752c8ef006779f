import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest';
import type { Session } from '../../shared/api/session.ts';
import { AuditEvent } from '../../server/entities/AuditEvent.ts';
import { Person } from '../../server/entities/Person.ts';
import { SessionRow } from '../../server/entities/SessionRow.ts';
import { startBrokenIssuer, type Answering, type BrokenIssuer } from '../support/broken-issuer.ts';
import { buildPerson } from '../support/build-site.ts';
import { openTestServer, testConfig, type TestServer } from '../support/test-server.ts';

/*
 * A provider that fails in the middle of a sign-in. What has to be checked of an answer: OpenID Connect Core 1.0, sections
 * 3.1.2.7, 3.1.3.5 and 3.1.3.7. What the person is told is the product's own rule, no source.
 */
let issuer: BrokenIssuer;
let server: TestServer;

let before: { people: number; signIns: number };

const openServer = (issuerUrl: string) =>
  openTestServer({
    now: Math.floor(Date.now() / 1000),
    config: { oidc: { ...testConfig.oidc, issuerUrl } },
  });
const counts = async () => ({
  people: await server.deps.database.read.countBy(Person, { subject: 'somebody' }),
  signIns: await server.deps.database.read.countBy(AuditEvent, { event: 'person.signed-in' }),
});

beforeAll(async () => {
  issuer = await startBrokenIssuer(testConfig.oidc.clientId);
  server = await openServer(issuer.url);
});
afterAll(async () => {
  await server.close();
  await issuer.close();
});
beforeEach(async () => {
  issuer.mend();
  await server.deps.database.write((manager) => manager.deleteAll(SessionRow));
  before = await counts();
});

/** A server remembers what it has once learnt of its provider, its keys among it: one that knows nothing yet. */
async function onFreshServer(work: () => Promise<void>): Promise<void> {
  const kept = server;
  server = await openServer(issuer.url);
  before = await counts();
  try {
    await work();
  } finally {
    await server.close();
    server = kept;
  }
}

const cookieOf = (reply: { headers: Record<string, unknown> }) =>
  (reply.headers['set-cookie'] as string[] | undefined)?.[0].split(';')[0] ?? '';
const whoIs = async (cookie: string) =>
  (await server.nobody().get('/api/session').set('cookie', cookie)).body as Session;

/** Begins a sign-in as a browser does; the provider is told the nonce that it must put into the token. */
async function begin(cookie = ''): Promise<{ cookie: string; callback: string }> {
  const reply = await server.nobody().get('/auth/sign-in?returnTo=/sites/a/tonight').set('cookie', cookie);
  const asked = new URL(reply.headers.location).searchParams;
  issuer.claims = { ...issuer.claims, nonce: asked.get('nonce') };
  const callback = `/auth/callback?code=a-code&state=${encodeURIComponent(asked.get('state') ?? '')}`;
  return { cookie: cookieOf(reply) || cookie, callback };
}
const finish = ({ cookie, callback }: { cookie: string; callback: string }) =>
  server.nobody().get(callback).set('cookie', cookie);

const pageOf = (problem: string) => `/sign-in?problem=${problem}&returnTo=${encodeURIComponent('/sites/a/tonight')}`;

/** Nobody is signed in by what happened: no person, no audit row, no session with somebody in it. */
async function expectNobody(cookie: string): Promise<void> {
  expect((await whoIs(cookie)).person).toBeNull();
  expect(await counts()).toEqual(before);
  for (const { personId, data } of await server.deps.database.read.find(SessionRow)) {
    expect(personId).toBeNull();
    expect(Object.keys(JSON.parse(data) as object)).toEqual(['cookie']);
  }
}

test('one that answers well signs the person in: the other tests fail for their own reason', async () => {
  const under = await begin();
  const reply = await finish(under);
  expect(reply.headers.location).toBe('/sites/a/tonight');
  expect((await whoIs(cookieOf(reply))).person?.name).toBe('Some Body');
  expect(issuer.asked).toEqual(['/.well-known/openid-configuration', '/token', '/keys']);
});

describe('a provider that is out of order', () => {
  const ways: Answering[] = ['status 500', 'status 503 as a page', 'closed connection'];
  test.each([...ways.map((way) => ['token', way] as const), ...ways.map((way) => ['keys', way] as const)])(
    'when the code is exchanged (%s: %s) is said to be so; nobody is signed in, and a new sign-in goes well',
    (where, way) =>
      onFreshServer(async () => {
        const under = await begin();
        issuer.answering[where] = way;
        const reply = await finish(under);
        expect(reply.status).toBe(302);
        expect(reply.headers.location).toBe(pageOf('unreachable'));
        await expectNobody(under.cookie);
        // The answer was used: the same address does not sign anybody in later.
        issuer.mend();
        expect((await finish(under)).headers.location).toContain('problem=expired');
        const again = await begin(under.cookie);
        expect((await finish(again)).headers.location).toBe('/sites/a/tonight');
      }),
  );

  test.each(['token', 'keys'] as const)(
    'that never answers (%s) is given up after ten seconds, while everything else goes on',
    (where) =>
      onFreshServer(async () => {
        const under = await begin();
        issuer.answering[where] = 'never';
        const startedAt = performance.now();
        const pending = finish(under).then((reply) => reply);
        expect((await server.nobody().get('/readyz')).status).toBe(200);
        expect(performance.now() - startedAt).toBeLessThan(3000);
        expect((await pending).headers.location).toBe(pageOf('unreachable'));
        expect(performance.now() - startedAt).toBeLessThan(15_000);
        await expectNobody(under.cookie);
      }),
    30_000,
  );

  test.each<Answering>([...ways, 'nonsense'])('when it is first asked (%s) is tried again at the next', (way) =>
    onFreshServer(async () => {
      issuer.answering.discovery = way;
      const reply = await server.nobody().get('/auth/sign-in?returnTo=/sites/a/tonight');
      expect(reply.headers.location).toBe(pageOf('unreachable'));
      expect(reply.headers['set-cookie']).toBeUndefined();
      expect(await server.deps.database.read.count(SessionRow)).toBe(0);
      issuer.mend();
      expect((await finish(await begin())).headers.location).toBe('/sites/a/tonight');
    }),
  );

  test.each(['server_error', 'temporarily_unavailable'])('that sends the person back with %s', async (error) => {
    const under = await begin();
    const callback = under.callback.replace('code=a-code', `error=${error}`);
    expect((await finish({ ...under, callback })).headers.location).toBe(pageOf('unreachable'));
    await expectNobody(under.cookie);
  });
});

describe('an answer that does not prove who the person is', () => {
  const now = Math.floor(Date.now() / 1000);
  test.each<[string, (told: BrokenIssuer) => void]>([
    ['has no ID token', (told) => (told.withIdToken = false)],
    ['is not what it should be', (told) => (told.answering.token = 'nonsense')],
    ['comes with another nonce', (told) => (told.claims.nonce = 'another')],
    ['comes without a nonce', (told) => (told.claims.nonce = undefined)],
    ['is of another issuer', (told) => (told.claims.iss = 'https://elsewhere.example')],
    ['is for another program', (told) => (told.claims.aud = 'another-program')],
    ['has run out', (told) => (told.claims.exp = now - 600)],
    ['names nobody', (told) => (told.claims.sub = undefined)],
    ['is signed by a key that the provider does not publish', (told) => (told.signedBy = 'another key')],
    ['is signed by nobody', (told) => (told.signedBy = 'nobody')],
  ])('since it %s is refused, and a new sign-in goes well', async (_, break_) => {
    const under = await begin();
    break_(issuer);
    expect((await finish(under)).headers.location).toBe(pageOf('refused'));
    await expectNobody(under.cookie);
    issuer.mend();
    expect((await finish(await begin(under.cookie))).headers.location).toBe('/sites/a/tonight');
  });
});

test('a locked session stays locked when the fresh sign-in fails', async () => {
  const person = await buildPerson(server.deps.database);
  const client = await server.signedInAs(person.id);
  await client.send('post', '/auth/lock');
  const under = await begin(client.cookie);
  issuer.answering.token = 'status 500';
  expect((await finish(under)).headers.location).toBe(pageOf('unreachable'));
  expect(await whoIs(client.cookie)).toMatchObject({ person: null, locked: true });
});

describe('a fault of our own', () => {
  test('when the person is stored ends at a page with words, not at a document for programs; nobody is signed in', async () => {
    const under = await begin();
    const real = server.deps.database.write;
    let calls = 0;
    // The first write takes the sign-in out of the session; the second would store the person.
    server.deps.database.write = (work) => {
      calls += 1;
      return calls === 2 ? Promise.reject(new Error('the disk is full')) : real(work);
    };
    const reply = await finish(under);
    server.deps.database.write = real;
    expect(reply.status).toBe(302);
    expect(reply.headers.location).toBe('/sign-in?problem=fault');
    await expectNobody(under.cookie);
    expect((await finish(await begin(under.cookie))).headers.location).toBe('/sites/a/tonight');
  });

  test('when the sign-in is begun keeps where the person was going', async () => {
    const real = server.deps.database.write;
    server.deps.database.write = () => Promise.reject(new Error('the disk is full'));
    const reply = await server.nobody().get('/auth/sign-in?returnTo=/sites/a/tonight');
    server.deps.database.write = real;
    expect(reply.headers.location).toBe(pageOf('fault'));
    const outside = await server.nobody().get('/auth/sign-in?returnTo=//elsewhere.example');
    expect(outside.headers.location).toMatch(/^http:\/\/127\.0\.0\.1:\d+\/auth\?/);
  });
});
