import { fork, type ChildProcess } from 'node:child_process';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { openDatabase } from '../../server/database/database.ts';
import { BriefDelivery } from '../../server/entities/BriefDelivery.ts';
import { Brief } from '../../server/entities/Brief.ts';
import { Job } from '../../server/entities/Job.ts';
import { makeStream } from '../../shared/stochastic/random.ts';
import { buildBrief, buildRecipients } from '../support/build-brief.ts';
import { buildSite } from '../support/build-site.ts';
import { putOnItsWay } from '../../server/features/briefs/put-on-its-way.ts';
import { JobQueue } from '../../server/jobs/queue.ts';
import { makeLogger } from '../../server/log.ts';
import { startMailServer } from '../support/start-mail-server.ts';
import type { Soak } from './soak.ts';

const kills = 120;
const recipientsEach = 40;
/** The mail server takes as long over a message as a real one near by may, so that kills fall into every part of a delivery. */
const mailServerMilliseconds = 3;
/** The latest moment of a kill after the sending has begun. */
const longestMilliseconds = 150;

/**
 * Kills a process that sends a brief (SIGKILL) at random moments and starts it again, until at least 120 kills have fallen
 * into the sending; the mail server's log is the judge. Each recipient gets the brief once. What SMTP leaves unknowable (killed
 * between the dot and the answer) must be marked as not known and must not have been sent twice.
 */
export const killBrief: Soak = {
  name: 'kill-brief',
  async run(print) {
    const folder = mkdtempSync(join(tmpdir(), 'shoalmark-kill-brief-'));
    let seen: () => void = () => undefined;
    const mail = await startMailServer({
      onRecipient: () => {
        seen();
        return null;
      },
      onMessage: () => new Promise((resolve) => setTimeout(() => resolve('take'), mailServerMilliseconds)),
    });
    const stream = makeStream(4310, 8, 1);
    let done = 0;
    let briefs = 0;
    let sent = 0;
    let notKnown = 0;
    let notKnownTaken = 0;
    try {
      while (done < kills) {
        mail.taken.length = 0;
        const briefId = await prepare(folder, briefs);
        briefs += 1;
        for (;;) {
          const child = startSender(folder, mail.smtpUrl);
          const before = mail.taken.length;
          // From its first word to the mail server on, so that the moment falls into the sending however slow the start was.
          const sending = new Promise<void>((resolve) => {
            seen = resolve;
          });
          await Promise.race([sending, child.ended]);
          const delay = stream.uniform() * longestMilliseconds;
          const ended = await Promise.race([
            child.ended,
            new Promise<false>((resolve) => setTimeout(() => resolve(false), delay)),
          ]);
          if (ended) break;
          child.process.kill('SIGKILL');
          await child.ended;
          done += 1;
          if (done % 10 === 0)
            print(`${String(done)} kills; the last after ${String(mail.taken.length - before)} messages`);
        }
        const result = await judge(folder, briefId, mail.taken);
        sent += result.sent;
        notKnown += result.notKnown;
        notKnownTaken += result.notKnownTaken;
      }
      print(
        `${String(done)} kills over ${String(briefs)} briefs to ${String(recipientsEach)} recipients: ${String(sent)} sent and taken once each; ` +
          `${String(notKnown)} not known (killed between the dot and the answer), of which the mail server had taken ${String(notKnownTaken)}; none twice, none lost unmarked`,
      );
    } finally {
      await mail.close();
      rmSync(folder, { recursive: true, force: true });
    }
  },
};

/** A brief on its way to its recipients, in a database of its own folder. */
async function prepare(folder: string, round: number): Promise<string> {
  const database = await openDatabase(folder);
  try {
    const built = await buildSite(database);
    const addresses = Array.from({ length: recipientsEach }, (_, i) => `r${String(round)}-${String(i)}@example.org`);
    await buildRecipients(database, built, addresses);
    const brief = await buildBrief(database, built);
    const jobs = new JobQueue(database, () => Math.floor(Date.now() / 1000), makeLogger('silent'));
    await database.write((manager) => putOnItsWay({ jobs }, manager, brief, 'Soak'));
    return brief.id;
  } finally {
    await database.close();
  }
}

interface Sender {
  process: ChildProcess;
  /** Its exit: true once everything was sent. */
  ended: Promise<boolean>;
}

function startSender(folder: string, smtpUrl: string): Sender {
  const child = fork(new URL('./send-briefs.ts', import.meta.url), [folder, smtpUrl], {
    execArgv: ['--import', 'tsx'],
    stdio: ['ignore', 'inherit', 'inherit', 'ipc'],
  });
  const ended = new Promise<boolean>((resolve, reject) => {
    child.once('exit', (code, signal) => {
      if (code !== 0 && signal !== 'SIGKILL') reject(new Error(`the sender ended with ${String(code ?? signal)}`));
      else resolve(code === 0);
    });
  });
  return { process: child, ended };
}

/** Holds what the database says against what the mail server took. @throws naming the first that does not agree */
async function judge(
  folder: string,
  briefId: string,
  taken: readonly { to: string[]; messageId: string }[],
): Promise<{ sent: number; notKnown: number; notKnownTaken: number }> {
  const database = await openDatabase(folder);
  try {
    const rows = await database.read.findBy(BriefDelivery, { briefId });
    const state = (await database.read.findOneByOrFail(Brief, { id: briefId })).state;
    if (state !== 'sent') throw new Error(`the brief is ${state} after everything was worked`);
    const counts = { sent: 0, notKnown: 0, notKnownTaken: 0 };
    for (const row of rows) {
      const got = taken.filter(({ to }) => to.includes(row.address));
      if (got.length > 1) throw new Error(`${row.address} (${row.state}) was taken ${String(got.length)} times`);
      if (got.some(({ messageId }) => !messageId.startsWith(`<${row.messageId}@`))) {
        throw new Error(`${row.address} was sent under another Message-ID`);
      }
      if (row.state === 'sent') {
        if (got.length !== 1) throw new Error(`${row.address} is marked as sent, and the mail server has nothing`);
        counts.sent += 1;
      } else if (row.state === 'not known') {
        counts.notKnown += 1;
        counts.notKnownTaken += got.length;
      } else {
        throw new Error(`${row.address} is left ${row.state}`);
      }
    }
    if (taken.some(({ to }) => to.length !== 1)) throw new Error('a message went to more than one recipient');
    // The next round begins with an empty queue.
    await database.write((manager) => manager.createQueryBuilder().delete().from(Job).execute());
    return counts;
  } finally {
    await database.close();
  }
}
