import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import * as oidc from 'openid-client';
import { afterAll, beforeAll, beforeEach, describe, expect, it, vi } from 'vitest';
import { demoAccounts, demoPassword, saltbyId } from '../../../demo/farrowmere-accounts.ts';
import { startOidcIssuer } from '../../../demo/oidc-issuer.ts';
import type { OidcIssuer } from '../../../demo/oidc-issuer.ts';

const redirectUri = 'http://127.0.0.1:9/auth/callback';
const signedOutUri = 'http://127.0.0.1:9/';

/** A browser without scripts: keeps cookies by path, follows redirects inside the issuer, stops at any other origin. */
class Browser {
  private readonly cookies = new Map<string, { value: string; path: string }>();

  async open(url: string, form?: Record<string, string>): Promise<{ url: string; html: string; status: number }> {
    let at = new URL(url);
    let body = form && new URLSearchParams(form);
    for (let hop = 0; hop < 12; hop += 1) {
      const cookie = [...this.cookies]
        .filter(([, { path }]) => at.pathname.startsWith(path))
        .map(([name, { value }]) => `${name}=${value}`)
        .join('; ');
      const response = await fetch(at, {
        redirect: 'manual',
        headers: { cookie },
        method: body ? 'POST' : 'GET',
        body,
      });
      for (const line of response.headers.getSetCookie()) this.keep(line);
      const location = response.headers.get('location');
      if (location === null) return { url: at.href, html: await response.text(), status: response.status };
      await response.arrayBuffer();
      const next = new URL(location, at);
      if (next.origin !== at.origin) return { url: next.href, html: '', status: response.status };
      at = next;
      body = undefined;
    }
    throw new Error('redirects without end');
  }

  private keep(line: string): void {
    const [pair, ...attributes] = line.split(/;\s*/);
    const name = pair.slice(0, pair.indexOf('='));
    const value = pair.slice(pair.indexOf('=') + 1);
    const path = attributes.find((attribute) => /^path=/i.test(attribute))?.slice(5) ?? '/';
    if (value === '') this.cookies.delete(name);
    else this.cookies.set(name, { value, path });
  }
}

function formOf(html: string): { action: string; fields: Record<string, string> } {
  const action = /<form[^>]*action="([^"]+)"/.exec(html)?.[1] ?? '';
  const fields: Record<string, string> = {};
  for (const [input] of html.matchAll(/<input[^>]*>/g)) {
    const name = /name="([^"]+)"/.exec(input)?.[1];
    if (name !== undefined) fields[name] = /value="([^"]*)"/.exec(input)?.[1] ?? '';
  }
  return { action, fields };
}

describe('startOidcIssuer', () => {
  const dataDir = mkdtempSync(join(tmpdir(), 'shoalmark-issuer-'));
  const warn = vi.spyOn(console, 'warn');
  let issuer: OidcIssuer;
  let config: oidc.Configuration;
  let browser: Browser;

  const options = {
    port: 0,
    clientId: 'shoalmark',
    clientSecret: 'a-secret-for-the-test',
    redirectUris: [redirectUri],
    postLogoutRedirectUris: [signedOutUri],
    accounts: demoAccounts,
    dataDir,
    password: demoPassword,
  };
  const discover = (url: string) =>
    oidc.discovery(new URL(url), options.clientId, undefined, oidc.ClientSecretBasic(options.clientSecret), {
      // eslint-disable-next-line @typescript-eslint/no-deprecated -- marked so to stand out; the stand-in on loopback has no TLS
      execute: [oidc.allowInsecureRequests],
    });

  beforeAll(async () => {
    issuer = await startOidcIssuer(options);
    config = await discover(issuer.url);
  });
  afterAll(async () => {
    await issuer.close();
    rmSync(dataDir, { recursive: true });
  });
  beforeEach(() => {
    browser = new Browser();
  });

  async function startSignIn(more: Record<string, string> = {}) {
    const verifier = oidc.randomPKCECodeVerifier();
    const checks = { pkceCodeVerifier: verifier, expectedState: oidc.randomState(), expectedNonce: oidc.randomNonce() };
    const url = oidc.buildAuthorizationUrl(config, {
      redirect_uri: redirectUri,
      scope: 'openid profile email groups',
      code_challenge: await oidc.calculatePKCECodeChallenge(verifier),
      code_challenge_method: 'S256',
      state: checks.expectedState,
      nonce: checks.expectedNonce,
      ...more,
    });
    return { page: await browser.open(url.href), checks };
  }

  async function submit(page: { url: string; html: string }, fields: Record<string, string>) {
    const form = formOf(page.html);
    return browser.open(new URL(form.action, page.url).href, { ...form.fields, ...fields });
  }

  async function signIn(username: string, more: Record<string, string> = {}) {
    const { page, checks } = await startSignIn(more);
    expect(page.html).toContain('Stand-in hospital sign-in (demo)');
    const back = await submit(page, { username, password: demoPassword });
    expect(back.url).toContain(redirectUri);
    return oidc.authorizationCodeGrant(config, new URL(back.url), { ...checks, idTokenExpected: true });
  }

  it('signs in with two plain fields and says who it is in the ID token', async () => {
    const before = Math.floor(Date.now() / 1000);
    const claims = (await signIn('charge2')).claims();
    expect(claims).toMatchObject({
      sub: 'charge2',
      name: 'Dilip Marrow',
      email: 'dilip.marrow@saltby.example',
      email_verified: true,
      groups: [`${saltbyId}:charge`],
    });
    expect(claims?.auth_time).toBeGreaterThanOrEqual(before);
  });

  it('shows the accounts of the demo and a form that needs no script', async () => {
    const { page } = await startSignIn();
    expect(Object.keys(formOf(page.html).fields)).toEqual(['username', 'password']);
    expect(page.html).not.toContain('<script');
    for (const { username } of demoAccounts) expect(page.html).toContain(`<code>${username}</code>`);
    const font = await fetch(`${issuer.url}/nunito-sans.woff2`);
    expect(font.headers.get('content-type')).toBe('font/woff2');
    expect(
      Buffer.from(await font.arrayBuffer())
        .subarray(0, 4)
        .toString(),
    ).toBe('wOF2');
  });

  it('says that a password or a name is wrong, keeps the name, and lets the next try through', async () => {
    const { page, checks } = await startSignIn();
    const refused = await submit(page, { username: 'charge', password: 'wrong' });
    expect(refused.html).toContain('User name or password is wrong');
    expect(formOf(refused.html).fields.username).toBe('charge');
    const unknown = await submit(refused, { username: '"><script>', password: demoPassword });
    expect(unknown.html).toContain('User name or password is wrong');
    expect(unknown.html).not.toContain('"><script>');
    const back = await submit(unknown, { username: 'charge', password: demoPassword });
    const tokens = await oidc.authorizationCodeGrant(config, new URL(back.url), { ...checks, idTokenExpected: true });
    expect(tokens.claims()?.sub).toBe('charge');
  });

  it('signs a second time without asking, unless told to ask', async () => {
    await signIn('steward');
    expect((await startSignIn()).page.url).toContain(redirectUri);
    expect((await startSignIn({ prompt: 'login' })).page.html).toContain('name="password"');
    // The session is at least a second old only after a wait, so zero is the age that is surely passed.
    expect((await startSignIn({ max_age: '0' })).page.html).toContain('name="password"');
  });

  it('lets another person sign in over the first at a shared workstation', async () => {
    await signIn('charge');
    const second = await signIn('operations', { prompt: 'login' });
    expect(second.claims()?.sub).toBe('operations');
    expect((await signIn('operations', { prompt: 'login' })).claims()?.sub).toBe('operations');
  });

  it('signs out at its own end and sends the browser back', async () => {
    const tokens = await signIn('executive');
    const url = oidc.buildEndSessionUrl(config, {
      id_token_hint: tokens.id_token ?? '',
      post_logout_redirect_uri: signedOutUri,
    });
    const page = await browser.open(url.href);
    expect(page.html).toContain('<h1>Sign out</h1>');
    const back = await submit(page, { logout: 'yes' });
    expect(back.url).toBe(signedOutUri);
    expect((await startSignIn()).page.html).toContain('name="password"');
  });

  it('refuses a return address that it does not know, on a page of its own', async () => {
    const { page } = await startSignIn({ redirect_uri: 'http://127.0.0.1:9/elsewhere' });
    expect(page.status).toBe(400);
    expect(page.html).toContain('Sign-in did not work');
  });

  it('refuses a request without PKCE', async () => {
    const url = oidc.buildAuthorizationUrl(config, { redirect_uri: redirectUri, scope: 'openid', state: 'x' });
    const { searchParams } = new URL((await browser.open(url.href)).url);
    expect(searchParams.get('error')).toBe('invalid_request');
  });

  it('answers a stale form with a page, not a crash', async () => {
    const stale = await new Browser().open(`${issuer.url}/interaction/gone`, { username: 'charge', password: 'demo' });
    expect(stale.status).toBe(400);
    expect(stale.html).toContain('expired');
  });

  it('keeps its keys between starts, and writes nothing on the console', async () => {
    const keysOf = async (url: string) => (await fetch(`${url}/jwks`)).text();
    const other = await startOidcIssuer(options);
    try {
      expect(await keysOf(other.url)).toEqual(await keysOf(issuer.url));
    } finally {
      await other.close();
    }
    expect(warn).not.toHaveBeenCalled();
  });
});
