import { openDatabase } from '../../server/database/database.ts';
import type { Dependencies } from '../../server/dependencies.ts';
import { sendJobKind } from '../../server/features/briefs/put-on-its-way.ts';
import { makeSendKind } from '../../server/features/briefs/send-brief.job.ts';
import { JobQueue } from '../../server/jobs/queue.ts';
import { makeLogger } from '../../server/log.ts';

/** The process that is killed: works the queue of a folder until nothing waits. */
const [folder, smtpUrl] = process.argv.slice(2);
const database = await openDatabase(folder);
const clock = () => Math.floor(Date.now() / 1000);
const jobs = new JobQueue(database, clock, makeLogger('silent'));
const config = {
  baseUrl: 'http://127.0.0.1:4310',
  sessionSecret: 'soak-session-secret-0123456789abcdef',
  smtpUrl,
  mailFrom: 'Shoalmark <brief@farrowmere.example>',
};
// Sending needs no more than this of what the server is made of, and starts the sooner.
const deps = { database, clock, jobs, config } as unknown as Dependencies;
await jobs.start({ [sendJobKind]: makeSendKind(deps) });
await jobs.idle();
await jobs.stop();
await database.close();
process.exit(0);
