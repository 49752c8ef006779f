import fc from 'fast-check';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { roles } from '../../shared/domain/permission.ts';
import { badRequest, countRows, routesToTry, sendBad } from '../support/bad-requests.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

/* A small run; `npm run test:soak -- --only bad-requests` sends 10,000. */
let server: TestServer;
let built: BuiltSite;
let client: SignedIn;

beforeAll(async () => {
  server = await openTestServer();
  built = await buildSite(server.deps.database);
  const every = roles.map((role) => (role === 'administrator' ? { role } : { role, siteId: built.site.id }));
  client = await server.signedInAs((await buildPerson(server.deps.database, every)).id);
});
afterAll(() => server.close());

test('requests that nobody should send are refused without a fault of ours, and store nothing', async () => {
  const routes = routesToTry(server.app.routes.contracts);
  const before = await countRows(server.deps.database);
  await fc.assert(
    fc.asyncProperty(badRequest, async (bad) => {
      const contract = routes[bad.route % routes.length];
      const reply = await sendBad(client, contract, built.site.id, bad);
      expect(reply.status, `${contract.id}: ${reply.text.slice(0, 300)}`).toBeLessThan(500);
      expect(reply.headers['x-request-id']).toMatch(/^[0-9a-f-]{36}$/);
    }),
    { numRuns: 400, seed: 4310 },
  );
  expect(await countRows(server.deps.database)).toBe(before);
});
