import fc from 'fast-check';
import { roles } from '../../shared/domain/permission.ts';
import { badRequest, countRows, routesToTry, sendBad } from '../support/bad-requests.ts';
import { buildPerson, buildSite } from '../support/build-site.ts';
import { openTestServer } from '../support/test-server.ts';
import type { Soak } from './soak.ts';

const requests = 10_000;
const mostGrowth = 150e6;

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
      let memoryAtTenth = 0;
      await fc.assert(
        fc.asyncProperty(badRequest, async (bad) => {
          const contract = routes[bad.route % routes.length];
          const reply = await sendBad(client, contract, built.site.id, bad);
          if (reply.status >= 500) throw new Error(`${contract.id}: ${reply.text.slice(0, 300)}`);
          statuses.set(reply.status, (statuses.get(reply.status) ?? 0) + 1);
          sent += 1;
          if (sent === requests / 10) memoryAtTenth = process.memoryUsage.rss();
        }),
        { numRuns: requests, endOnFailure: true },
      );
      const growth = process.memoryUsage.rss() - memoryAtTenth;
      const shares = [...statuses]
        .toSorted(([a], [b]) => a - b)
        .map(([status, n]) => `${String(n)} × ${String(status)}`);
      print(`${String(sent)} requests to ${String(routes.length)} routes: ${shares.join(', ')}`);
      print(`memory ${(growth / 1e6).toFixed(0)} MB more after the last than after a tenth of them`);
      const after = await countRows(server.deps.database);
      if (after !== before) throw new Error(`rows were stored: before ${before}; after ${after}`);
      if (growth > mostGrowth) throw new Error('the memory grew');
    } finally {
      await server.close();
    }
  },
};
