import { createHash } from 'node:crypto';
import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest';
import type { MachineToken as Shown, MadeToken } from '../../shared/api/tokens.ts';
import { AuditEvent } from '../../server/entities/AuditEvent.ts';
import { Census } from '../../server/entities/Census.ts';
import { MachineToken } from '../../server/entities/MachineToken.ts';
import { SessionRow } from '../../server/entities/SessionRow.ts';
import { VisitLog } from '../../server/entities/VisitLog.ts';
import { refusedTokensAMinute, tokenCallsAMinute } from '../../server/http/machine-token.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

/*
 * Sources: the product's own table of roles and actions (who makes tokens, what they are for); RFC 6750, 2.1 (the header);
 * RFC 9110, 11.6.1 (a 401 carries WWW-Authenticate).
 */
let server: TestServer;
let built: BuiltSite;
let elsewhere: BuiltSite;
let administrator: SignedIn;
let steward: SignedIn;

beforeAll(async () => {
  server = await openTestServer();
});
afterAll(() => server.close());
beforeEach(async () => {
  const { database } = server.deps;
  built = await buildSite(database);
  elsewhere = await buildSite(database);
  const siteId = built.site.id;
  const asPerson = async (role: 'administrator' | 'steward') =>
    server.signedInAs(
      (await buildPerson(database, [role === 'steward' ? { role, siteId } : { role }], `Ada ${role}`)).id,
    );
  administrator = await asPerson('administrator');
  steward = await asPerson('steward');
});

async function make(purpose: 'census' | 'visit-log', site = built): Promise<MadeToken> {
  const body = { siteId: site.site.id, purpose, name: 'Census feed' };
  const reply = await administrator.send('post', '/api/tokens', body);
  expect(reply.status, reply.text).toBe(201);
  return reply.body as MadeToken;
}
const censusPath = (site = built) => `/api/sites/${site.site.id}/censuses`;
const census = (present = 3) => ({
  takenAt: server.time.now,
  areas: [{ areaId: built.areas[0].id, present, waiting: 0, boarding: 0 }],
  undecidedWaiting: null,
  ambulancesHolding: null,
  arrivalsSinceMidnight: null,
});
const withToken = (secret: string, path: string, body: object = census()) =>
  server.nobody().post(path).set('authorization', `Bearer ${secret}`).send(body);

describe('making a token', () => {
  test('shows the secret once and stores its digest only', async () => {
    const { token, secret } = await make('census');
    expect(token).toMatchObject({
      siteId: built.site.id,
      siteName: built.site.name,
      purpose: 'census',
      name: 'Census feed',
      createdBy: 'Ada administrator',
      lastUsedAt: null,
      revokedAt: null,
    });
    // 256 bits are 43 characters of base64url.
    expect(secret).toMatch(/^shoalmark_[A-Za-z0-9_-]{43}$/);
    const row = await server.deps.database.read.findOneByOrFail(MachineToken, { id: token.id });
    expect(row.secretHash).toBe(createHash('sha256').update(secret).digest('hex'));
    expect(JSON.stringify(row)).not.toContain(secret);
    const listed = await administrator.get('/api/tokens');
    expect(listed.text).not.toContain(secret);
    const { tokens, sites } = listed.body as { tokens: Shown[]; sites: { id: string }[] };
    expect(tokens.find(({ id }) => id === token.id)).toEqual(token);
    expect(sites.map(({ id }) => id)).toEqual(expect.arrayContaining([built.site.id, elsewhere.site.id]));
    const audited = await server.deps.database.read.findOneByOrFail(AuditEvent, { subject: token.id });
    expect(audited).toMatchObject({ event: 'token.made', actor: 'Ada administrator', siteId: built.site.id });
    expect(JSON.stringify(audited)).not.toContain(secret);
  });

  test('two are never alike', async () => {
    expect((await make('census')).secret).not.toBe((await make('census')).secret);
  });

  test.each([
    ['no such site', { siteId: 'nothing', purpose: 'census', name: 'Census feed' }],
    ['another purpose', { siteId: null, purpose: 'everything', name: 'Census feed' }],
    ['no name', { siteId: null, purpose: 'census', name: '  ' }],
    ['a name that could identify somebody', { siteId: null, purpose: 'census', name: 'Ask jo@hospital.example' }],
  ])('is refused: %s', async (_, body) => {
    const before = await server.deps.database.read.count(MachineToken);
    const reply = await administrator.send('post', '/api/tokens', { ...body, siteId: body.siteId ?? built.site.id });
    expect(reply.status).toBe(400);
    expect(reply.text).not.toContain('jo@hospital');
    expect(await server.deps.database.read.count(MachineToken)).toBe(before);
  });

  test('a steward makes, sees and revokes those for upload at the own site, and no others', async () => {
    const own = `/api/sites/${built.site.id}/tokens`;
    const forCensus = await make('census');
    const forUploadElsewhere = await make('visit-log', elsewhere);
    const made = (await steward.send('post', own, { name: 'Nightly upload' })).body as MadeToken;
    expect(made.token).toMatchObject({ purpose: 'visit-log', siteId: built.site.id, createdBy: 'Ada steward' });
    const { tokens } = (await steward.get(own)).body as { tokens: Shown[] };
    expect(tokens).toEqual([made.token]);
    for (const { token } of [forCensus, forUploadElsewhere]) {
      expect((await steward.send('post', `${own}/${token.id}/revocation`)).status).toBe(404);
    }
    expect((await steward.send('post', `${own}/${made.token.id}/revocation`)).body).toMatchObject({
      revokedAt: server.time.now,
    });
    expect((await steward.send('post', `${own}/${made.token.id}/revocation`)).status).toBe(409);
  });
});

describe('calling with a token', () => {
  test('enters a census without a session, and the trail names the token', async () => {
    const { token, secret } = await make('census');
    const reply = await withToken(secret, censusPath());
    expect(reply.status, reply.text).toBe(201);
    const { censusId } = reply.body as { censusId: string };
    const row = await server.deps.database.read.findOneByOrFail(Census, { id: censusId });
    expect(row.enteredBy).toBe('Machine token “Census feed”');
    const audited = await server.deps.database.read.findOneByOrFail(AuditEvent, { subject: censusId });
    expect(audited).toMatchObject({ event: 'census.entered', actor: 'Machine token “Census feed”', personId: null });
    expect(JSON.parse(audited.detail)).toMatchObject({ tokenId: token.id });
    expect(reply.headers['set-cookie']).toBeUndefined();
    const used = await server.deps.database.read.findOneByOrFail(MachineToken, { id: token.id });
    expect(used.lastUsedAt).toBe(server.time.now);
  });

  test('checks and accepts a visit log', async () => {
    const { secret } = await make('visit-log');
    const at = (hoursAgo: number) => new Date((server.time.now - hoursAgo * 3600) * 1000).toISOString();
    const rows = [60, 50, 40].map((hours) => `${at(hours)},${at(hours - 3)},Acute`);
    const csv = ['arrival_at,departure_at,care_area', ...rows].join('\n');
    const path = `/api/sites/${built.site.id}/visit-logs`;
    const checked = await server
      .nobody()
      .post(`${path}/checks`)
      .set('authorization', `bearer ${secret}`)
      .set('content-type', 'text/csv')
      .send(csv);
    expect(checked.status, checked.text).toBe(201);
    const { checkId } = checked.body as { checkId: string };
    const facts = { selectedBy: 'arrived', takenAt: server.time.now, missingDeparture: 'unknown' };
    const accepted = await withToken(secret, path, { checkId, goodRowsOnly: false, facts });
    expect(accepted.status, accepted.text).toBe(202);
    const { logId } = accepted.body as { logId: string };
    const log = await server.deps.database.read.findOneByOrFail(VisitLog, { id: logId });
    expect(log.uploadedBy).toBe('Machine token “Census feed”');
    const audited = await server.deps.database.read.findOneByOrFail(AuditEvent, { subject: logId });
    expect(audited).toMatchObject({ actor: 'Machine token “Census feed”', personId: null });
  });

  test('is refused for another site, another purpose, once revoked, and when it is none', async () => {
    const own = await make('census');
    const forUpload = await make('visit-log');
    expect((await withToken(own.secret, censusPath(elsewhere))).status).toBe(404);
    expect((await withToken(own.secret, '/api/sites/nothing/censuses')).status).toBe(404);
    expect((await withToken(forUpload.secret, censusPath())).status).toBe(403);
    await administrator.send('post', `/api/tokens/${own.token.id}/revocation`);
    for (const secret of [own.secret, own.secret.slice(0, -1), `${own.secret}A`, 'shoalmark_', own.token.id]) {
      const reply = await withToken(secret, censusPath());
      expect(reply.status, secret).toBe(401);
      expect(reply.headers['www-authenticate']).toMatch(/^Bearer/);
      expect(reply.text).not.toContain(secret);
    }
    expect(await server.deps.database.read.countBy(Census, { siteId: built.site.id })).toBe(0);
  });

  test('opens nothing but the routes that say so', async () => {
    for (const contract of server.app.routes.contracts) {
      if (contract.access === 'public') continue;
      // One each: there may be more routes than calls a minute.
      const { secret } = await make('census');
      const path = contract.path.replace(':siteId', built.site.id).replaceAll(/:(\w+)/g, 'nothing');
      const request = server.nobody()[contract.method](path).set('authorization', `Bearer ${secret}`);
      const type = contract.streamedBody ?? 'application/json';
      const reply = await (contract.method === 'get' ? request : request.set('content-type', type).send('{}'));
      const expected = contract.id === 'enterCensus' ? 400 : contract.token ? 403 : 401;
      expect(reply.status, contract.id).toBe(expected);
    }
    expect(server.app.routes.contracts.filter(({ token }) => token).map(({ id }) => id)).toEqual(
      expect.arrayContaining(['enterCensus', 'checkVisitLog', 'acceptVisitLog']),
    );
  });

  test('a bad token is not made good by a session that comes along, and a session still needs its own token', async () => {
    const person = await buildPerson(server.deps.database, [{ role: 'charge', siteId: built.site.id }]);
    const { cookie, csrfToken } = await server.signedInAs(person.id);
    const post = (headers: Record<string, string>) => server.nobody().post(censusPath()).set(headers).send(census());
    const authorization = 'Bearer none-of-ours';
    expect((await post({ cookie, 'x-csrf-token': csrfToken, authorization })).status).toBe(401);
    expect((await post({ cookie, authorization: `Bearer ${(await make('census')).secret}` })).status).toBe(403);
    expect((await post({ cookie, 'x-csrf-token': csrfToken })).status).toBe(201);
  });

  test('makes no session', async () => {
    const before = await server.deps.database.read.count(SessionRow);
    const { secret } = await make('census');
    await withToken(secret, censusPath());
    expect(await server.deps.database.read.count(SessionRow)).toBe(before);
  });
});

// A server of its own: the limits count by token and by address.
describe('the rate limit', () => {
  let limited: TestServer;
  beforeAll(async () => {
    limited = await openTestServer();
  });
  afterAll(() => limited.close());
  const call = (secret: string, path: string) =>
    limited.nobody().post(path).set('authorization', `Bearer ${secret}`).send({});

  test('holds one token back, not another, and not people', async () => {
    const site = await buildSite(limited.deps.database);
    const id = site.site.id;
    const client = await limited.signedInAs((await buildPerson(limited.deps.database, [{ role: 'administrator' }])).id);
    const made = async () =>
      (await client.send('post', '/api/tokens', { siteId: id, purpose: 'census', name: 'Feed' })).body as MadeToken;
    const [one, other] = [(await made()).secret, (await made()).secret];
    const path = `/api/sites/${id}/censuses`;
    for (let calls = 0; calls < tokenCallsAMinute; calls += 1) expect((await call(one, path)).status).toBe(400);
    const held = await call(one, path);
    expect(held.status).toBe(429);
    expect(held.body).toMatchObject({ title: 'Too many requests' });
    expect((await call(other, path)).status).toBe(400);
    expect((await client.get('/api/tokens')).status).toBe(200);
  });

  test('holds back an address that tries tokens, but not a good token from there', async () => {
    const statuses = new Map<number, number>();
    for (let calls = 0; calls <= refusedTokensAMinute; calls += 1) {
      const { status } = await call(`guess-${String(calls)}`, '/api/sites/nothing/censuses');
      statuses.set(status, (statuses.get(status) ?? 0) + 1);
    }
    expect(Object.fromEntries(statuses)).toEqual({ 401: refusedTokensAMinute, 429: 1 });
    const site = await buildSite(limited.deps.database);
    const client = await limited.signedInAs((await buildPerson(limited.deps.database, [{ role: 'administrator' }])).id);
    const body = { siteId: site.site.id, purpose: 'census', name: 'Feed' };
    const { secret } = (await client.send('post', '/api/tokens', body)).body as MadeToken;
    expect((await call(secret, `/api/sites/${site.site.id}/censuses`)).status).toBe(400);
  });
});
