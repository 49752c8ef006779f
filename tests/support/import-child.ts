import { makeJobKinds } from '../../server/jobs/registry.ts';
import { sweepVisitLogs } from '../../server/features/visit-logs/sweep-visit-logs.ts';
import { openServer } from '../../server/start.ts';
import { testConfig } from './test-server.ts';

/** Opens a server on the data folder of its argument, works its jobs as a start does, and says when it begins and when it is done. */
const { deps, issuer, close } = await openServer({ ...testConfig, dataDir: process.argv[2] });
await sweepVisitLogs(deps);
process.stdout.write('begun\n');
await deps.jobs.start(makeJobKinds(deps, issuer));
await deps.jobs.idle();
process.stdout.write('done\n');
await close();
