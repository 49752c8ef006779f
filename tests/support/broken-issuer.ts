import { generateKeyPairSync, sign, type KeyObject } from 'node:crypto';
import { createServer, type ServerResponse } from 'node:http';
import type { AddressInfo } from 'node:net';

/** What an address of the provider does instead of answering as it should. */
export type Answering = 'well' | 'status 500' | 'status 503 as a page' | 'nonsense' | 'never' | 'closed connection';

/** A provider of OpenID Connect that fails as it is told. */
export interface BrokenIssuer {
  url: string;
  answering: Record<'discovery' | 'token' | 'keys', Answering>;
  /** Changes claims of the next ID tokens; undefined takes a claim away. */
  claims: Record<string, unknown>;
  /** Who signs: the key that is published, another one, or nobody. */
  signedBy: 'published key' | 'another key' | 'nobody';
  /** False: the answer holds no ID token at all. */
  withIdToken: boolean;
  /** Everything as it should be again. */
  mend(): void;
  /** Paths that were asked for. */
  asked: string[];
  close(): Promise<void>;
}

/**
 * Starts a provider on the loopback address with the three addresses that a server calls itself. Its sign-in page is never
 * asked: a test goes to the callback with a code of its own. Form of answers: OpenID Connect Discovery 1.0, 3 and 4;
 * RFC 6749, 5.1; RFC 7517; RFC 7519.
 */
export async function startBrokenIssuer(clientId: string): Promise<BrokenIssuer> {
  const published = generateKeyPairSync('rsa', { modulusLength: 2048 });
  const another = generateKeyPairSync('rsa', { modulusLength: 2048 });
  const well = () => ({ discovery: 'well', token: 'well', keys: 'well' }) satisfies BrokenIssuer['answering'];
  const part = (value: object) => Buffer.from(JSON.stringify(value)).toString('base64url');

  function idToken(): string {
    const now = Math.floor(Date.now() / 1000);
    const claims = {
      ...{ iss: issuer.url, sub: 'somebody', aud: clientId, iat: now, exp: now + 300, auth_time: now },
      ...{ name: 'Some Body', email: 'some.body@people.test', email_verified: true },
      ...issuer.claims,
    };
    const alg = issuer.signedBy === 'nobody' ? 'none' : 'RS256';
    const text = `${part({ alg, kid: 'one', typ: 'JWT' })}.${part(claims)}`;
    const key: KeyObject | null =
      issuer.signedBy === 'nobody' ? null : (issuer.signedBy === 'another key' ? another : published).privateKey;
    return `${text}.${key ? sign('sha256', Buffer.from(text), key).toString('base64url') : ''}`;
  }

  function answer(res: ServerResponse, how: Answering, body: () => object): void {
    if (how === 'never') return;
    if (how === 'closed connection') res.destroy();
    else if (how === 'status 500') {
      res.writeHead(500, { 'content-type': 'application/json' }).end(JSON.stringify({ error: 'server_error' }));
    } else if (how === 'status 503 as a page') {
      res.writeHead(503, { 'content-type': 'text/html' }).end('<h1>Down for maintenance</h1>');
    } else if (how === 'nonsense') {
      res.writeHead(200, { 'content-type': 'application/json' }).end('{"half":');
    } else res.writeHead(200, { 'content-type': 'application/json' }).end(JSON.stringify(body()));
  }

  const server = createServer((req, res) => {
    const path = (req.url ?? '').split('?')[0];
    issuer.asked.push(path);
    const { answering, url } = issuer;
    if (path === '/.well-known/openid-configuration') {
      answer(res, answering.discovery, () => ({
        ...{ issuer: url, authorization_endpoint: `${url}/auth`, token_endpoint: `${url}/token` },
        ...{ jwks_uri: `${url}/keys`, response_types_supported: ['code'], subject_types_supported: ['public'] },
        id_token_signing_alg_values_supported: ['RS256'],
      }));
    } else if (path === '/token') {
      const told = { access_token: 'access', token_type: 'Bearer', expires_in: 300 };
      answer(res, answering.token, () => (issuer.withIdToken ? { ...told, id_token: idToken() } : told));
    } else if (path === '/keys') {
      const key = published.publicKey.export({ format: 'jwk' });
      answer(res, answering.keys, () => ({ keys: [{ ...key, kid: 'one', use: 'sig', alg: 'RS256' }] }));
    } else res.writeHead(404).end();
  });
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  const issuer: BrokenIssuer = {
    url: `http://127.0.0.1:${String((server.address() as AddressInfo).port)}`,
    answering: well(),
    claims: {},
    signedBy: 'published key',
    withIdToken: true,
    mend() {
      Object.assign(issuer, { answering: well(), claims: {}, signedBy: 'published key', withIdToken: true });
    },
    asked: [],
    close: () =>
      new Promise((resolve) => {
        server.close(() => {
          resolve();
        });
        server.closeAllConnections();
      }),
  };
  return issuer;
}
