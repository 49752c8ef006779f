import { mkdtempSync, rmSync } from 'node:fs';
import { createServer, type Server } from 'node:http';
import type { AddressInfo } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { Not } from 'typeorm';
import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest';
import type { Session } from '../../shared/api/session.ts';
import { demoAccounts } from '../../demo/farrowmere-accounts.ts';
import { startOidcIssuer, type OidcIssuer } from '../../demo/oidc-issuer.ts';
import { newId } from '../../server/database/new-id.ts';
import { AuditEvent } from '../../server/entities/AuditEvent.ts';
import { Membership } from '../../server/entities/Membership.ts';
import { Person } from '../../server/entities/Person.ts';
import { SessionRow } from '../../server/entities/SessionRow.ts';
import { recognisePerson } from '../../server/features/sign-in/recognise-person.ts';
import { CookieBrowser, type Page } from '../support/cookie-browser.ts';
import { openTestServer, testConfig, type TestServer } from '../support/test-server.ts';

const keys = mkdtempSync(join(tmpdir(), 'shoalmark-sign-in-'));
const password = 'a-password';
let http: Server;
let base: string;
let issuer: OidcIssuer;
let server: TestServer;
let browser: CookieBrowser;

beforeAll(async () => {
  http = createServer((req, res) => {
    server.app.express(req, res);
  });
  await new Promise<void>((resolve) => http.listen(0, '127.0.0.1', resolve));
  base = `http://127.0.0.1:${String((http.address() as AddressInfo).port)}`;
  const { clientId, clientSecret } = testConfig.oidc;
  issuer = await startOidcIssuer({
    port: 0,
    clientId,
    clientSecret,
    redirectUris: [`${base}/auth/callback`],
    postLogoutRedirectUris: [`${base}/sign-in`],
    accounts: demoAccounts,
    dataDir: keys,
    password,
  });
  const now = Math.floor(Date.now() / 1000);
  server = await openTestServer({
    now,
    config: { baseUrl: base, oidc: { ...testConfig.oidc, issuerUrl: issuer.url } },
  });
});
afterAll(async () => {
  http.closeAllConnections();
  await new Promise((resolve) => http.close(resolve));
  await issuer.close();
  await server.close();
  rmSync(keys, { recursive: true });
});
beforeEach(() => {
  server.time.now = Math.floor(Date.now() / 1000);
  browser = new CookieBrowser();
});

/** Follows every redirect but the one to a page of the product, which no client is built for here. */
const untilOurPage = (next: URL) => next.origin !== base || next.pathname.startsWith('/auth/');
const untilCallback = (next: URL) => !next.href.startsWith(`${base}/auth/callback`);

const start = (query = '') => browser.open(`${base}/auth/sign-in${query}`, { follow: untilOurPage });
const enter = (page: Page, username: string, follow = untilOurPage) =>
  browser.submit(page, { username, password }, follow);
const signIn = async (username: string, query = '') => enter(await start(query), username);
const cookie = () => browser.cookieFor(new URL(`${base}/api`));
const sidOf = (header: string) =>
  decodeURIComponent(header)
    .replace(/^shoalmark=s:/, '')
    .split('.')[0];

async function session(header = cookie()): Promise<Session> {
  return (await (await fetch(`${base}/api/session`, { headers: { cookie: header } })).json()) as Session;
}

async function signOut(): Promise<Response> {
  const { csrfToken } = await session();
  return fetch(`${base}/auth/sign-out`, { method: 'POST', headers: { cookie: cookie(), 'x-csrf-token': csrfToken } });
}

/** Changes what the session remembers of the sign-in under way. */
async function changeSignIn(change: Record<string, unknown>): Promise<void> {
  const where = { sid: sidOf(cookie()) };
  const row = await server.deps.database.read.findOneByOrFail(SessionRow, where);
  const data = JSON.parse(row.data) as { signIn: object };
  const changed = JSON.stringify({ ...data, signIn: { ...data.signIn, ...change } });
  await server.deps.database.write((manager) => manager.update(SessionRow, where, { data: changed }));
}

describe('signing in', () => {
  test('goes to the provider with PKCE, state and nonce, and back to the page that was asked for', async () => {
    const first = await browser.open(`${base}/auth/sign-in?returnTo=/sites/a/tonight`, { follow: () => false });
    const { searchParams: asked, origin } = new URL(first.location ?? '');
    expect(origin).toBe(issuer.url);
    // Source: RFC 7636 (PKCE) and OpenID Connect Core 1.0, sections 3.1.2.1 and 15.5.2.
    expect(asked.get('response_type')).toBe('code');
    expect(asked.get('code_challenge_method')).toBe('S256');
    expect(asked.get('code_challenge')).toMatch(/^[\w-]{43}$/);
    expect(asked.get('state')!.length).toBeGreaterThanOrEqual(22);
    expect(asked.get('nonce')!.length).toBeGreaterThanOrEqual(22);
    expect(asked.get('scope')).toContain('openid');
    const page = await browser.open(first.location!);
    const back = await enter(page, 'charge');
    expect(back.location).toBe('/sites/a/tonight');
    expect((await session()).person).toMatchObject({
      name: 'Ines Hartwell',
      email: 'ines.hartwell@farrowmere.example',
    });
    const person = await server.deps.database.read.findOneByOrFail(Person, { issuer: issuer.url, subject: 'charge' });
    const events = await server.deps.database.read.findBy(AuditEvent, { personId: person.id });
    expect(events.map(({ event, subject }) => [event, subject])).toEqual([['person.signed-in', person.id]]);
  });

  test('changes the session id, so that one planted before is worth nothing', async () => {
    const page = await start();
    const before = cookie();
    const signedOutToken = (await session()).csrfToken;
    await enter(page, 'steward');
    expect(sidOf(cookie())).not.toBe(sidOf(before));
    expect((await session()).person?.name).toBe('Wen Aldous');
    expect((await session()).csrfToken).not.toBe(signedOutToken);
    expect((await session(before)).person).toBeNull();
    expect(await server.deps.database.read.existsBy(SessionRow, { sid: sidOf(before) })).toBe(false);
  });

  test('marks the cookie so that scripts and other sites cannot use it', async () => {
    const reply = await fetch(`${base}/auth/sign-in`, { redirect: 'manual' });
    expect(reply.headers.getSetCookie()).toEqual([
      expect.stringMatching(/^shoalmark=.*; Path=\/; HttpOnly; SameSite=Lax$/),
    ]);
  });

  test('knows a person again', async () => {
    await signIn('executive');
    const first = (await session()).person;
    browser = new CookieBrowser();
    await signIn('executive');
    expect((await session()).person).toEqual(first);
    expect(await server.deps.database.read.countBy(Person, { subject: 'executive' })).toBe(1);
  });

  test('asks again when told to, so that the next person at a shared workstation is themselves', async () => {
    await signIn('charge');
    expect((await start()).location).toBe('/');
    const page = await start('?fresh=1');
    expect(page.html).toContain('name="password"');
    await enter(page, 'operations');
    expect((await session()).person?.name).toBe('Tomas Okoro-Lind');
  });

  test.each([
    ['/sites/a/tonight?hour=2#areas', '/sites/a/tonight?hour=2#areas'],
    ['', '/'],
    ['sites', '/'],
    ['//elsewhere.example/', '/'],
    ['/\\elsewhere.example/', '/'],
    ['https://elsewhere.example/', '/'],
    ['/\t/elsewhere.example/', '/'],
    ['/\n/elsewhere.example/', '/'],
    ['javascript:alert(1)', '/'],
  ])('with returnTo %j ends at %j', async (returnTo, expected) => {
    const back = await signIn('charge', `?returnTo=${encodeURIComponent(returnTo)}`);
    expect(back.location).toBe(expected);
  });
});

describe('an answer of the provider that is not for this sign-in', () => {
  async function callbackOf(username: string): Promise<URL> {
    const page = await enter(await start(), username, untilCallback);
    return new URL(page.location ?? '');
  }
  const refused = '/sign-in?problem=refused';

  test('with another state is refused; the sign-in itself can still end well', async () => {
    const address = await callbackOf('charge');
    const forged = new URL(address);
    forged.searchParams.set('state', 'something-else');
    expect((await browser.open(forged, { follow: untilOurPage })).location).toBe(refused);
    expect((await session()).person).toBeNull();
    expect((await browser.open(address, { follow: untilOurPage })).location).toBe('/');
    expect((await session()).person?.name).toBe('Ines Hartwell');
  });

  test('keeps where the person was going in the address of the sign-in page', async () => {
    const page = await enter(await start('?returnTo=/sites/a/models%3Farea%3Db'), 'charge', untilCallback);
    const address = new URL(page.location ?? '');
    await changeSignIn({ nonce: 'another-nonce' });
    const { location } = await browser.open(address, { follow: untilOurPage });
    expect(location).toBe(`${refused}&returnTo=${encodeURIComponent('/sites/a/models?area=b')}`);
  });

  test('with another nonce is refused', async () => {
    const address = await callbackOf('charge');
    await changeSignIn({ nonce: 'another-nonce' });
    expect((await browser.open(address, { follow: untilOurPage })).location).toBe(refused);
    expect((await session()).person).toBeNull();
  });

  test('without the secret of PKCE is refused', async () => {
    const address = await callbackOf('charge');
    await changeSignIn({ codeVerifier: 'x'.repeat(43) });
    expect((await browser.open(address, { follow: untilOurPage })).location).toBe(refused);
    expect((await session()).person).toBeNull();
  });

  test('in a browser that did not ask is refused', async () => {
    const address = await callbackOf('charge');
    browser = new CookieBrowser();
    expect((await browser.open(address, { follow: untilOurPage })).location).toBe('/sign-in?problem=expired');
    expect((await session()).person).toBeNull();
  });

  test('a second time is refused, whether the first went well or not', async () => {
    const good = await callbackOf('charge');
    await browser.open(good, { follow: untilOurPage });
    const signedIn = cookie();
    expect((await browser.open(good, { follow: untilOurPage })).location).toBe('/sign-in?problem=expired');
    expect(cookie()).toBe(signedIn);

    browser = new CookieBrowser();
    const bad = await callbackOf('charge');
    const broken = new URL(bad);
    broken.searchParams.set('code', 'not-a-code');
    expect((await browser.open(broken, { follow: untilOurPage })).location).toBe(refused);
    expect((await browser.open(bad, { follow: untilOurPage })).location).toBe('/sign-in?problem=expired');
    expect((await session()).person).toBeNull();
  });

  test('after a quarter of an hour is too late', async () => {
    const address = await callbackOf('charge');
    server.time.now += 15 * 60 + 1;
    expect((await browser.open(address, { follow: untilOurPage })).location).toBe('/sign-in?problem=expired');
    expect((await session()).person).toBeNull();
  });

  test('that says the person declined is refused', async () => {
    const address = await callbackOf('charge');
    address.searchParams.delete('code');
    address.searchParams.set('error', 'access_denied');
    expect((await browser.open(address, { follow: untilOurPage })).location).toBe(refused);
  });
});

describe('a person whom an administrator named by address', () => {
  const claims = { issuer: 'https://issuer.test', name: 'Noor Example', email: 'Noor@People.test' };

  async function invite(): Promise<string> {
    const id = newId();
    await server.deps.database.write(async (manager) => {
      await manager.insert(Person, {
        id,
        issuer: null,
        subject: null,
        name: 'noor@people.test',
        email: 'noor@people.test',
        createdAt: 1,
        lastSignInAt: null,
      });
      await manager.insert(Membership, {
        id: newId(),
        personId: id,
        role: 'administrator',
        siteId: null,
        groupId: null,
        endsAt: null,
        createdAt: 1,
      });
    });
    return id;
  }
  const recognise = (subject: string, emailVerified: boolean, email = claims.email) =>
    server.deps.database.write((manager) =>
      recognisePerson(manager, { ...claims, email, subject, emailVerified, groups: [] }, 5),
    );

  test('is bound by an address that the provider has verified, once', async () => {
    const invited = await invite();
    const stranger = await recognise('stranger', false);
    expect(stranger.id).not.toBe(invited);
    const bound = await recognise('noor', true);
    expect(bound).toMatchObject({ id: invited, name: 'Noor Example', subject: 'noor', lastSignInAt: 5 });
    const second = await recognise('someone with the same address', true);
    expect(second.id).not.toBe(invited);
    expect((await recognise('noor', false)).id).toBe(invited);
  });

  test('is not bound by an empty address', async () => {
    const nameless = await server.deps.database.write((manager) =>
      manager.save(
        manager.create(Person, {
          id: newId(),
          issuer: null,
          subject: null,
          name: 'x',
          email: '',
          createdAt: 1,
          lastSignInAt: null,
        }),
      ),
    );
    expect((await recognise('no address', true, '')).id).not.toBe(nameless.id);
  });

  test('signs in through the provider and has the role that waited', async () => {
    const id = newId();
    await server.deps.database.write(async (manager) => {
      const email = 'kirsa.quayle@farrowmere.example';
      await manager.insert(Person, {
        id,
        issuer: null,
        subject: null,
        name: email,
        email,
        createdAt: 1,
        lastSignInAt: null,
      });
      await manager.insert(Membership, { id: newId(), personId: id, role: 'administrator', createdAt: 1 });
    });
    await signIn('admin');
    const told = await session();
    expect(told.person).toMatchObject({ id, name: 'Kirsa Quayle' });
    expect(told.installationRoles).toEqual(['administrator']);
  });
});

describe('signing out', () => {
  test('ends the session here and at the provider, and the old cookie is worthless', async () => {
    await signIn('charge');
    const old = cookie();
    const reply = await signOut();
    expect(reply.status).toBe(200);
    expect(reply.headers.getSetCookie()).toEqual([expect.stringMatching(/^shoalmark=;.*Expires=Thu, 01 Jan 1970/)]);
    const { redirectTo } = (await reply.json()) as { redirectTo: string };
    const asked = new URL(redirectTo);
    expect(asked.origin).toBe(issuer.url);
    expect(asked.searchParams.get('id_token_hint')).toMatch(/^[\w-]+\.[\w-]+\.[\w-]+$/);

    expect((await session(old)).person).toBeNull();
    expect(await server.deps.database.read.existsBy(SessionRow, { sid: sidOf(old) })).toBe(false);
    const events = await server.deps.database.read.findBy(AuditEvent, { event: 'person.signed-out' });
    expect(events).toHaveLength(1);

    const page = await browser.open(redirectTo);
    const back = await browser.submit(page, { logout: 'yes' }, untilOurPage);
    expect(new URL(back.location ?? '', back.url).href).toBe(`${base}/sign-in`);
    expect((await start()).html).toContain('name="password"');
  });

  test('needs a session and its token', async () => {
    expect((await fetch(`${base}/auth/sign-out`, { method: 'POST' })).status).toBe(401);
    await signIn('charge');
    const without = await fetch(`${base}/auth/sign-out`, { method: 'POST', headers: { cookie: cookie() } });
    expect(without.status).toBe(403);
    expect((await session()).person).not.toBeNull();
  });

  test('leaves the person’s other sessions alone', async () => {
    await signIn('charge');
    const other = cookie();
    browser = new CookieBrowser();
    await signIn('charge');
    await signOut();
    expect((await session(other)).person?.name).toBe('Ines Hartwell');
  });
});

describe('a provider that is down', () => {
  test('sends the person to a page that says so, and is found again once it is up', async () => {
    let down: TestServer | null = null;
    let up: OidcIssuer | null = null;
    try {
      // Nothing listens on the port of an issuer that was closed.
      up = await startOidcIssuer({ ...issuerOptions(), port: 0 });
      const { url } = up;
      await up.close();
      up = null;
      down = await openTestServer({ config: { oidc: { ...testConfig.oidc, issuerUrl: url } } });
      const reply = await down.nobody().get('/auth/sign-in');
      expect(reply.status).toBe(302);
      expect(reply.headers.location).toBe('/sign-in?problem=unreachable');
      expect(await down.deps.database.read.countBy(SessionRow, { sid: Not('') })).toBe(0);
      up = await startOidcIssuer({ ...issuerOptions(), port: Number(new URL(url).port) });
      expect((await down.nobody().get('/auth/sign-in')).headers.location).toContain(`${url}/auth?`);
    } finally {
      await up?.close();
      await down?.close();
    }
  });

  test('does not keep anybody from signing out here', async () => {
    const alone = await openTestServer({ config: { oidc: { ...testConfig.oidc, issuerUrl: 'http://127.0.0.1:9' } } });
    try {
      const person = await alone.deps.database.write((manager) =>
        manager.save(
          manager.create(Person, {
            id: newId(),
            issuer: 'i',
            subject: 's',
            name: 'n',
            email: '',
            createdAt: 1,
            lastSignInAt: 1,
          }),
        ),
      );
      const client = await alone.signedInAs(person.id);
      expect((await client.send('post', '/auth/sign-out')).body).toEqual({ redirectTo: '/sign-in' });
      expect(((await client.get('/api/session')).body as Session).person).toBeNull();
    } finally {
      await alone.close();
    }
  });

  function issuerOptions() {
    const { clientId, clientSecret } = testConfig.oidc;
    const redirectUris = [`${testConfig.baseUrl}/auth/callback`];
    const postLogoutRedirectUris = [`${testConfig.baseUrl}/sign-in`];
    return {
      clientId,
      clientSecret,
      redirectUris,
      postLogoutRedirectUris,
      accounts: demoAccounts,
      dataDir: keys,
      password,
    };
  }
});
