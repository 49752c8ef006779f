import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import express from 'express';
import supertest from 'supertest';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { makeErrorHandler } from '../../server/http/error-handler.ts';
import { serveClient } from '../../server/http/static-client.ts';
import { makeLogger } from '../../server/log.ts';

const clientDir = mkdtempSync(join(tmpdir(), 'shoalmark-client-'));
const app = express();

beforeAll(() => {
  mkdirSync(join(clientDir, 'assets'));
  writeFileSync(join(clientDir, 'index.html'), '<html></html>');
  writeFileSync(join(clientDir, 'assets', 'page-1.js'), 'export {};');
  serveClient(app, clientDir);
  app.use(makeErrorHandler(makeLogger('silent')));
});
afterAll(() => rmSync(clientDir, { recursive: true, force: true }));

describe('assets of the client', () => {
  test('are kept for a year, since their names change with what is in them', async () => {
    const reply = await supertest(app).get('/assets/page-1.js');
    expect(reply.status).toBe(200);
    expect(reply.headers['cache-control']).toContain('immutable');
  });

  test('that an older version had are not there, which is no fault of the server', async () => {
    const reply = await supertest(app).get('/assets/page-0.js');
    expect(reply.status).toBe(404);
    expect(reply.headers['content-type']).toContain('application/problem+json');
  });
});
