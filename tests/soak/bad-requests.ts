import { setFlagsFromString } from 'node:v8';
import { runInNewContext } from 'node:vm';
import fc from 'fast-check';
import { roles } from '../../shared/domain/permission.ts';
import { badRequest, countRows, routesToTry, sendBad } from '../support/bad-requests.ts';
import { buildPerson, buildSite } from '../support/build-site.ts';
import { openTestServer } from '../support/test-server.ts';
import type { Soak } from './soak.ts';

const requests = 10_000;
/** Bytes that live on after a collection: what the last nine thousand requests may leave behind. */
const mostGrowth = 20e6;

setFlagsFromString('--expose-gc');
const collectGarbage = runInNewContext('gc') as () => void;

/** What is held after everything that nobody holds was given back: heap and buffers. */
function held(): number {
  collectGarbage();
  const { heapUsed, external } = process.memoryUsage();
  return heapUsed + external;
}

/** Ten thousand requests that nobody should send: no answer of 500 or more, no stored row, no growing memory. */
export const badRequests: Soak = {
  name: 'bad-requests',
  async run(print) {
    const server = await openTestServer();
    try {
      const built = await buildSite(server.deps.database);
      const every = roles.map((role) => (role === 'administrator' ? { role } : { role, siteId: built.site.id }));
      const client = await server.signedInAs((await buildPerson(server.deps.database, every)).id);
      const routes = routesToTry(server.app.routes.contracts);
      const before = await countRows(server.deps.database);
      const statuses = new Map<number, number>();
      let sent = 0;
      let heldAtTenth = 0;
      await fc.assert(
        fc.asyncProperty(badRequest, async (bad) => {
          const contract = routes[bad.route % routes.length];
          const reply = await sendBad(client, contract, built.site.id, bad);
          if (reply.status >= 500) throw new Error(`${contract.id}: ${reply.text.slice(0, 300)}`);
          statuses.set(reply.status, (statuses.get(reply.status) ?? 0) + 1);
          sent += 1;
          if (sent === requests / 10) heldAtTenth = held();
        }),
        { numRuns: requests, endOnFailure: true },
      );
      const growth = held() - heldAtTenth;
      const shares = [...statuses]
        .toSorted(([a], [b]) => a - b)
        .map(([status, n]) => `${String(n)} × ${String(status)}`);
      print(`${String(sent)} requests to ${String(routes.length)} routes: ${shares.join(', ')}`);
      print(
        `${(growth / 1e6).toFixed(1)} MB more held after the last than the ${(heldAtTenth / 1e6).toFixed(0)} MB after a tenth of them`,
      );
      const after = await countRows(server.deps.database);
      if (after !== before) throw new Error(`rows were stored: before ${before}; after ${after}`);
      if (growth > mostGrowth) throw new Error('the memory grew');
    } finally {
      await server.close();
    }
  },
};
