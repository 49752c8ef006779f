import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { buildSite } from '../support/build-site.ts';
import { openTestServer, type TestServer } from '../support/test-server.ts';

let server: TestServer;

beforeAll(async () => {
  server = await openTestServer();
});
afterAll(() => server.close());

interface Operation {
  operationId: string;
  summary: string;
  security?: object[];
  parameters?: { name: string; in: string; required?: boolean; schema: object }[];
  requestBody?: { content: Record<string, { schema: object }> };
  responses: Record<string, { description: string; content?: Record<string, { schema: object }> }>;
}
interface Description {
  openapi: string;
  info: { title: string; version: string };
  paths: Record<string, Record<string, Operation>>;
  components: { securitySchemes: Record<string, { type: string; in?: string; name?: string; scheme?: string }> };
}

async function describeApi(): Promise<Description> {
  const reply = await server.nobody().get('/api/openapi.json');
  expect(reply.status).toBe(200);
  expect(reply.headers['content-type']).toMatch(/^application\/json/);
  return reply.body as Description;
}

/** Every object within a document. */
function* objectsIn(value: unknown): Generator<Record<string, unknown>> {
  if (Array.isArray(value)) for (const item of value) yield* objectsIn(item);
  else if (typeof value === 'object' && value !== null) {
    yield value as Record<string, unknown>;
    for (const item of Object.values(value)) yield* objectsIn(item);
  }
}

describe('the description of the API', () => {
  test('lists every route once, at its path and method', async () => {
    const { paths } = await describeApi();
    const described = Object.entries(paths).flatMap(([path, methods]) =>
      Object.entries(methods).map(([method, { operationId }]) => `${operationId} ${method} ${path}`),
    );
    const registered = server.app.routes.contracts.map(
      ({ id, method, path }) => `${id} ${method} ${path.replaceAll(/:(\w+)/g, '{$1}')}`,
    );
    expect(described.sort()).toEqual(registered.sort());
    expect(new Set(server.app.routes.contracts.map(({ id }) => id)).size).toBe(registered.length);
  });

  // Source of the shape: OpenAPI Specification 3.1.0, sections 4.8.1 to 4.8.16.
  test('has the shape of OpenAPI 3.1', async () => {
    const document = await describeApi();
    expect(document.openapi).toMatch(/^3\.1\.\d+$/);
    expect(document.info.title).toBe('Shoalmark');
    expect(document.info.version).toMatch(/^\d+\.\d+\.\d+/);
    for (const [path, methods] of Object.entries(document.paths)) {
      expect(path).toMatch(/^\//);
      for (const operation of Object.values(methods)) {
        const inPath = [...path.matchAll(/\{(\w+)\}/g)].map(([, name]) => name);
        const stated = (operation.parameters ?? []).filter((parameter) => parameter.in === 'path');
        expect(stated.map(({ name }) => name).sort(), operation.operationId).toEqual(inPath.sort());
        expect(stated.every(({ required }) => required === true)).toBe(true);
        for (const parameter of operation.parameters ?? []) expect(parameter.schema).toBeTypeOf('object');
        expect(operation.summary).not.toBe('');
        const answers = Object.entries(operation.responses);
        expect(answers.length).toBeGreaterThan(0);
        for (const [status, { description }] of answers) {
          expect(status).toMatch(/^(default|[1-5]\d\d)$/);
          expect(description).not.toBe('');
        }
        expect(operation.responses.default.content).toHaveProperty(['application/problem+json']);
      }
    }
    for (const each of objectsIn(document)) {
      if (typeof each.$ref !== 'string') continue;
      expect(each.$ref).toMatch(/^#\//);
      const target = each.$ref
        .slice(2)
        .split('/')
        .reduce<unknown>((at, key) => (at as Record<string, unknown> | undefined)?.[key], document);
      expect(target, each.$ref).toBeTypeOf('object');
    }
  });

  test('says which routes need a signed-in person, and how', async () => {
    const { paths, components } = await describeApi();
    expect(components.securitySchemes.session).toEqual({ type: 'apiKey', in: 'cookie', name: 'shoalmark' });
    expect(components.securitySchemes.machineToken).toEqual({ type: 'http', scheme: 'bearer' });
    const operations = Object.values(paths).flatMap((methods) => Object.values(methods));
    for (const contract of server.app.routes.contracts) {
      const operation = operations.find(({ operationId }) => operationId === contract.id);
      const person = contract.access === 'public' ? [] : [{ session: [] }];
      const machine = contract.token ? [{ machineToken: [] }] : [];
      expect(operation?.security ?? [], contract.id).toEqual([...person, ...machine]);
    }
  });

  test('states limits, bodies and replies', async () => {
    const { paths } = await describeApi();
    const census = paths['/api/sites/{siteId}/censuses'].post;
    const schema = JSON.stringify(census.requestBody?.content['application/json'].schema);
    expect(schema).toContain('"maximum":2000');
    expect(schema).toContain('"undecidedWaiting"');
    expect(census.responses['201'].content).toHaveProperty(['application/json']);
    expect(paths['/api/sites/{siteId}/visit-logs/checks'].post.requestBody?.content).toHaveProperty(['text/csv']);
  });
});

describe('health', () => {
  test('alive, and ready', async () => {
    expect((await server.nobody().get('/healthz')).body).toEqual({ alive: true });
    expect((await server.nobody().get('/readyz')).body).toEqual({ ready: true });
  });

  test('not ready once the database cannot be written, and ready again after', async () => {
    const { write } = server.deps.database;
    await write((manager) => manager.query('PRAGMA query_only = ON'));
    try {
      const reply = await server.nobody().get('/readyz');
      expect(reply.status).toBe(503);
      expect(JSON.parse(reply.text)).toMatchObject({ status: 503, title: 'Not ready' });
      expect((await server.nobody().get('/healthz')).status).toBe(200);
    } finally {
      await write((manager) => manager.query('PRAGMA query_only = OFF'));
    }
    expect((await server.nobody().get('/readyz')).status).toBe(200);
    await buildSite(server.deps.database);
  });
});
