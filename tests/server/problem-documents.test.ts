import type { Express } from 'express';
import supertest from 'supertest';
import { afterAll, beforeAll, beforeEach, describe, expect, test, vi } from 'vitest';
import { problem, type Problem } from '../../shared/api/common.ts';
import { Census } from '../../server/entities/Census.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

let server: TestServer;
let built: BuiltSite;
let charge: SignedIn;
let censuses: string;

beforeAll(async () => {
  server = await openTestServer();
  built = await buildSite(server.deps.database);
  const person = await buildPerson(server.deps.database, [{ role: 'charge', siteId: built.site.id }]);
  charge = await server.signedInAs(person.id);
  censuses = `/api/sites/${built.site.id}/censuses`;
});
afterAll(() => server.close());
beforeEach(() => {
  vi.restoreAllMocks();
});

/** Source of the members and the media type: RFC 9457, sections 3 and 3.1. */
function expectProblem(reply: supertest.Response, status: number): Problem {
  expect(reply.status, reply.text).toBe(status);
  expect(reply.headers['content-type']).toMatch(/^application\/problem\+json/);
  expect(reply.headers['cache-control']).toBe('no-store');
  const body = JSON.parse(reply.text) as Problem;
  expect(problem.strict().safeParse(body).error).toBeUndefined();
  expect(body.type).toBe('about:blank');
  expect(body.status).toBe(status);
  expect(body.title).not.toBe('');
  expect(body.detail).not.toBe('');
  // Beyond the RFC: the id under which the log tells more.
  expect(body.requestId).toBe(reply.headers['x-request-id']);
  return body;
}

describe('an answer other than success is a problem document', () => {
  test.each(['get', 'post', 'put', 'patch', 'delete'] as const)(
    '%s of an address that is not there',
    async (method) => {
      for (const path of [
        '/api',
        '/api/nothing',
        '/auth/nothing',
        `/api/sites/${built.site.id}/nothing`,
        '/healthz/x',
      ]) {
        expectProblem(await (method === 'get' ? charge.get(path) : charge.send(method, path)), 404);
      }
    },
  );

  test('a method that an address does not know', async () => {
    expectProblem(await charge.send('delete', censuses), 404);
  });

  test('an address that cannot be decoded', async () => {
    const body = expectProblem(await charge.get('/api/sites/%E0%A4%A/tonight'), 400);
    expect(body.detail).not.toContain('decode');
  });

  test('JSON that is malformed, or not an object', async () => {
    for (const text of ['{"takenAt": 1', 'nonsense', '"text"', '7', '']) {
      const sent = charge.send('post', censuses).set('content-type', 'application/json').send(text);
      expectProblem(await sent, 400);
    }
  });

  test('a body that is too large', async () => {
    const reply = await charge.send('post', censuses, { areas: 'x'.repeat(1_100_000) });
    expect(expectProblem(reply, 413).kept).toBe('Nothing was stored.');
  });

  test('a body of another type', async () => {
    for (const type of ['text/plain', 'application/x-www-form-urlencoded', 'text/csv']) {
      const reply = await charge.send('post', censuses).set('content-type', type).send('a=1');
      expect(expectProblem(reply, 415).next).toContain('application/json');
    }
  });

  test('an encoding and a character set that the server does not know', async () => {
    const encoded = charge.send('post', censuses).set('content-type', 'application/json').set('content-encoding', 'x');
    expectProblem(await encoded.send('{}'), 415);
    const charset = charge.send('post', censuses).set('content-type', 'application/json; charset=x');
    expectProblem(await charset.send('{}'), 415);
  });

  test('input that does not fit: every fault at once, each with its place', async () => {
    const reply = await charge.send('post', censuses, {
      takenAt: 'now',
      areas: [{ areaId: built.areas[0].id, present: -1, waiting: 0.5, boarding: 0 }],
      undecidedWaiting: null,
      ambulancesHolding: null,
    });
    const { faults, kept, next } = expectProblem(reply, 400);
    expect(faults?.map(({ at }) => at).sort()).toEqual([
      'areas.0.present',
      'areas.0.waiting',
      'arrivalsSinceMidnight',
      'takenAt',
    ]);
    expect(kept).toBe('Nothing was stored.');
    expect(next).toMatch(/\w/);
    expect(await server.deps.database.read.countBy(Census, {})).toBe(0);
  });

  test('nobody signed in, not allowed, not there', async () => {
    expectProblem(await server.nobody().get(`/api/sites/${built.site.id}`), 401);
    expectProblem(await charge.get(`/api/sites/${built.site.id}/arrival-models`), 403);
    expectProblem(await charge.get('/api/sites/elsewhere'), 404);
  });
});

describe('a fault of ours', () => {
  const secret = 'SELECT * FROM person WHERE name = Olivia';

  async function withFailingRead<T>(work: () => Promise<T>): Promise<T> {
    vi.spyOn(server.deps.database.read, 'find').mockRejectedValue(new Error(secret));
    return work();
  }

  test('answers 500 and hides what happened; the log has it, under the id of the answer', async () => {
    const log = vi.spyOn(server.deps.logger, 'error').mockImplementation(() => undefined);
    const reply = await withFailingRead(() => charge.get(`/api/sites/${built.site.id}`));
    const body = expectProblem(reply, 500);
    expect(reply.text).not.toMatch(/SELECT|Olivia|\.ts|node_modules|at /);
    expect(body.next).toContain(body.requestId);
    expect(log).toHaveBeenCalledWith(
      expect.objectContaining({
        requestId: body.requestId,
        err: expect.objectContaining({ message: secret }) as Error,
      }),
      expect.any(String),
    );
  });

  test('an error of a library that happens to carry a status is not taken for an answer', async () => {
    vi.spyOn(server.deps.logger, 'error').mockImplementation(() => undefined);
    const failure = Object.assign(new Error(secret), { status: 403, type: 'upstream' });
    vi.spyOn(server.deps.database.read, 'find').mockRejectedValue(failure);
    expectProblem(await charge.get(`/api/sites/${built.site.id}`), 500);
  });

  test('a reply that breaks its own contract is one', async () => {
    vi.spyOn(server.deps.logger, 'error').mockImplementation(() => undefined);
    vi.spyOn(server.deps.database.read, 'findOneByOrFail').mockResolvedValue({ name: 7 });
    expectProblem(await charge.get(`/api/sites/${built.site.id}`), 500);
  });
});

describe('every answer', () => {
  test('carries a request id, forbids framing and sniffing, and does not say what it runs on', async () => {
    for (const reply of [await server.nobody().get('/api/session'), await server.nobody().get('/api/nothing')]) {
      expect(reply.headers['x-request-id']).toMatch(/^[0-9a-f-]{36}$/);
      expect(reply.headers['content-security-policy']).toContain("default-src 'none'");
      expect(reply.headers['content-security-policy']).toContain("frame-ancestors 'none'");
      expect(reply.headers['x-content-type-options']).toBe('nosniff');
      expect(reply.headers['referrer-policy']).toBe('no-referrer');
      expect(reply.headers).not.toHaveProperty('x-powered-by');
      expect(reply.headers).not.toHaveProperty('strict-transport-security');
    }
  });
});

test('too many sign-ins from one address are told to wait', async () => {
  const other = await openTestServer();
  try {
    const app: Express = other.app.express;
    const client = supertest.agent(app);
    let reply = await client.get('/auth/nothing');
    for (let i = 0; i < 700 && reply.status !== 429; i += 1) reply = await client.get('/auth/nothing');
    expect(expectProblem(reply, 429).next).toContain('minute');
  } finally {
    await other.close();
  }
});
