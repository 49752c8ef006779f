import { existsSync, readdirSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, expect, test } from 'vitest';
import type { VisitLogCheck } from '../../shared/api/visit-logs.ts';
import { rowProblems } from '../../shared/domain/visit-row.ts';
import { VisitLog } from '../../server/entities/VisitLog.ts';
import { brokenAt, problemFiles, refusedFiles } from '../support/broken-visit-files.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

let server: TestServer;
let built: BuiltSite;
let steward: SignedIn;

beforeAll(async () => {
  server = await openTestServer({ now: brokenAt });
  built = await buildSite(server.deps.database);
  const person = await buildPerson(server.deps.database, [{ role: 'steward', siteId: built.site.id }]);
  steward = await server.signedInAs(person.id);
});
afterAll(() => server.close());

const check = (body: string | Buffer) =>
  steward.send('post', `/api/sites/${built.site.id}/visit-logs/checks`).set('content-type', 'text/csv').send(body);

test('there are at least 40 kinds, each under a name of its own', () => {
  const names = [...refusedFiles, ...problemFiles].map(({ name }) => name);
  expect(names.length).toBeGreaterThanOrEqual(40);
  expect(new Set(names).size).toBe(names.length);
});

test.each(refusedFiles)('refused whole, with nothing kept: $name', async ({ body, said }) => {
  const reply = await check(body);
  expect(reply.status, reply.text).toBe(422);
  const { faults, kept } = reply.body as { faults: { at: string; message: string }[]; kept: string };
  expect(faults.map(({ at, message }) => `${at}: ${message}`)).toEqual(said);
  expect(kept).toBe('The file was deleted and nothing was stored.');
  const folder = join(server.deps.config.dataDir, 'tmp');
  expect(existsSync(folder) ? readdirSync(folder) : []).toEqual([]);
  expect(await server.deps.database.read.countBy(VisitLog, {})).toBe(0);
});

test.each(problemFiles)('a problem row beside a good one: $name', async ({ body, said }) => {
  const checked = await check(body);
  expect(checked.status, checked.text).toBe(201);
  const report = checked.body as VisitLogCheck;
  expect(report).toMatchObject({ rows: 2, goodRows: 1, problemRows: 1 });
  // In the report as kinds, columns and row numbers; in words where the file is to be taken whole.
  expect(report.problems.map(({ problem }) => said.some((words) => words.includes(rowProblems[problem])))).toEqual(
    said.map(() => true),
  );
  const refused = await steward.send('post', `/api/sites/${built.site.id}/visit-logs`, {
    checkId: report.checkId,
    goodRowsOnly: false,
    facts: { selectedBy: 'arrived', takenAt: brokenAt, missingDeparture: 'unknown' },
  });
  expect(refused.status).toBe(422);
  const { faults } = refused.body as { faults: { at: string; message: string }[] };
  expect(faults.map(({ at, message }) => `${at}: ${message}`)).toEqual(said);
});
