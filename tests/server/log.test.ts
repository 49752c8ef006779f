import { QueryFailedError } from 'typeorm';
import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, test, vi } from 'vitest';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

/* OWASP ASVS 5.0, 16.2.1, 16.2.2, 16.2.4 and 16.2.5: what a log must hold and what must never be in it. */
let server: TestServer;
let built: BuiltSite;
let client: SignedIn;
let lines: string[] = [];
const secret = 'squirrel-7f3a9c';

beforeAll(async () => {
  server = await openTestServer({ config: { logLevel: 'trace' }, log: (line) => lines.push(line) });
  built = await buildSite(server.deps.database);
  const siteId = built.site.id;
  client = await server.signedInAs((await buildPerson(server.deps.database, [{ role: 'charge', siteId }])).id);
});
afterAll(() => server.close());
beforeEach(() => {
  lines = [];
});
afterEach(() => {
  vi.restoreAllMocks();
});

const census = () => ({
  takenAt: server.time.now,
  areas: built.areas.map(({ id }) => ({ areaId: id, present: 4, waiting: 0, boarding: 0 })),
  undecidedWaiting: null,
  ambulancesHolding: null,
  arrivalsSinceMidnight: null,
});
const requestLines = () => lines.map((line) => JSON.parse(line) as Record<string, unknown>).filter(({ req }) => req);
/** Everything that would let somebody else act: the cookie's parts and the anti-forgery token. */
const credentials = () => [
  ...decodeURIComponent(client.cookie).replace('shoalmark=s:', '').split('.'),
  client.csrfToken,
];

describe('a request leaves one line', () => {
  test('with its time in UTC, its id, method, path and answer', async () => {
    const reply = await client.get(`/api/sites/${built.site.id}/tonight`);
    const [line] = requestLines();
    expect(requestLines()).toHaveLength(1);
    expect(line).toMatchObject({
      req: { id: reply.headers['x-request-id'], method: 'GET', path: `/api/sites/${built.site.id}/tonight` },
      res: { statusCode: 200 },
    });
    expect(line.time).toMatch(/^\d{4}-\d\d-\d\dT\d\d:\d\d:\d\d\.\d{3}Z$/);
  });

  test.each<[string, () => PromiseLike<{ status: number }>]>([
    ['in the query', () => client.get(`/api/sites/${built.site.id}/tonight?token=${secret}`)],
    ['in the query of the answer of the provider', () => client.get(`/auth/callback?code=${secret}&state=${secret}`)],
    ['in the query of a calendar feed', () => server.nobody().get(`/api/calendar-feed.ics?secret=${secret}`)],
    ['in the link of a mail', () => server.nobody().get(`/mail/unsubscribe/${secret}`)],
    [
      'in a cookie',
      () => server.nobody().get('/api/session').set('cookie', `shoalmark=s:${secret}.x; other=${secret}`),
    ],
    ['in a bearer token', () => server.nobody().get('/api/session').set('authorization', `Bearer ${secret}`)],
    [
      'in the anti-forgery token',
      () => client.send('post', `/api/sites/${built.site.id}/censuses`, census()).set('x-csrf-token', secret),
    ],
    ['in a body that is refused', () => client.send('post', `/api/sites/${built.site.id}/censuses`, { note: secret })],
    [
      'in a body that is no JSON',
      () =>
        client
          .send('post', `/api/sites/${built.site.id}/censuses`)
          .set('content-type', 'application/json')
          .send(`{"note": ${secret}`),
    ],
    [
      'in a file',
      () =>
        client
          .send('post', `/api/sites/${built.site.id}/visit-logs/checks?fileName=${secret}.csv`)
          .set('content-type', 'text/csv')
          .send(`arrival,${secret}\n`),
    ],
  ])('without a secret %s', async (_, send) => {
    await send();
    expect(requestLines()).toHaveLength(1);
    expect(lines.join('')).not.toContain(secret);
    for (const credential of credentials()) expect(lines.join('')).not.toContain(credential);
  });
});

describe('a fault', () => {
  test('of the database is told without the values that were to be stored', async () => {
    vi.spyOn(server.deps.database, 'write').mockRejectedValue(
      new QueryFailedError('INSERT INTO census VALUES (?)', [secret], new Error('constraint failed')),
    );
    const reply = await client.send('post', `/api/sites/${built.site.id}/censuses`, census());
    expect(reply.status).toBe(500);
    expect(reply.text).not.toContain(secret);
    expect(lines.join('')).toContain('constraint failed');
    expect(lines.join('')).toContain(reply.headers['x-request-id']);
    expect(lines.join('')).not.toContain(secret);
  });

  test('that carries what was sent is told without it', () => {
    const error = Object.assign(new Error('no answer'), { options: { password: secret }, request: { body: secret } });
    server.deps.logger.warn({ err: error }, 'mail could not be sent');
    expect(lines.join('')).toContain('no answer');
    expect(lines.join('')).not.toContain(secret);
  });
});
