import { rmSync } from 'node:fs';
import { afterAll, beforeAll, beforeEach, expect, test } from 'vitest';
import supertest from 'supertest';
import { startMailbox, type Mailbox } from '../../demo/mailbox.ts';
import type { MadeToken } from '../../shared/api/tokens.ts';
import type { VisitLogCheck } from '../../shared/api/visit-logs.ts';
import { newId } from '../../server/database/new-id.ts';
import { GroupRole } from '../../server/entities/GroupRole.ts';
import { Job } from '../../server/entities/Job.ts';
import { VisitLog } from '../../server/entities/VisitLog.ts';
import { checkedTextFile, forgetChecked } from '../../server/features/visit-logs/checked-file.ts';
import { Person } from '../../server/entities/Person.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { buildVisitCsv, visitLine } from '../support/build-visit-csv.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

const day = 86_400;
/** 2026-09-21T14:13:20Z, a Monday. */
const now = 1_790_000_000;

let mailbox: Mailbox;
let server: TestServer;
let built: BuiltSite;
let steward: SignedIn;
let secret: string;
let logsPath: string;
let addresses: string[];

beforeAll(async () => {
  mailbox = await startMailbox({ smtpPort: 0, httpPort: 0 });
  server = await openTestServer({ now, config: { smtpUrl: mailbox.smtpUrl } });
});
afterAll(async () => {
  await server.close();
  await mailbox.close();
});
beforeEach(async () => {
  server.time.now = now;
  const { database } = server.deps;
  built = await buildSite(database, { name: 'Saltby Bay' });
  const siteId = built.site.id;
  const named = await buildPerson(database, [{ role: 'steward', siteId }], 'Sam Steward');
  const byGroup = await buildPerson(database, [], 'Gwen Group');
  await buildPerson(database, [{ role: 'steward', siteId, endsAt: now - 1 }], 'Former Steward');
  await buildPerson(database, [{ role: 'charge', siteId }], 'Nia Nurse');
  await database.write(async (manager) => {
    const claim = `stewards ${siteId}`;
    await manager.update(Person, { id: byGroup.id }, { identityGroups: JSON.stringify([claim]) });
    const role = {
      id: newId(),
      claim,
      role: 'steward',
      siteId,
      groupId: null,
      createdBy: 'Ada',
      createdAt: 1,
    } as const;
    await manager.insert(GroupRole, role);
  });
  addresses = [named.email, byGroup.email].sort();
  steward = await server.signedInAs(named.id);
  const made = await steward.send('post', `/api/sites/${siteId}/tokens`, { name: 'Nightly extract' });
  ({ secret } = made.body as MadeToken);
  logsPath = `/api/sites/${siteId}/visit-logs`;
});

const send = (csv: string, fileName = 'night.csv') =>
  supertest(server.app.express)
    .post(`${logsPath}/checks?fileName=${fileName}`)
    .set('authorization', `Bearer ${secret}`)
    .set('content-type', 'text/csv')
    .send(csv);
const mails = () => mailbox.messages().filter(({ recipients }) => addresses.includes(recipients[0]));
const good = () => buildVisitCsv({ from: now - 3 * day, rows: 100 });
const withName = () => `${good()}${visitLine({ arrival: now - day, area: 'olivia@example.org' })}\n`;

test('a refusal goes to every steward of the site, by name or by group, and never repeats a value', async () => {
  const refused = await send(
    `${good()}${visitLine({ arrival: now - day, area: 'olivia@example.org' })}\n`,
    'march-07700900123.csv',
  );
  expect(refused.status).toBe(422);
  await server.workJobs();
  expect(
    mails()
      .map(({ recipients }) => recipients)
      .sort(),
  ).toEqual(addresses.map((address) => [address]));
  const [{ subject, text, html }] = mails();
  expect(subject).toBe('Saltby Bay: upload of visits refused');
  expect(text).toContain('Saltby Bay: the nightly upload of visits was refused.');
  expect(text).toContain('The file could identify patients');
  expect(text).toContain('Machine token “Nightly extract”');
  expect(text).toContain(
    'column care_area (Care area): 1 row looks like an e-mail address. Take it out of the export and try again.',
  );
  expect(text).toContain(`/sites/${built.site.id}/logs`);
  for (const secretText of ['olivia', '07700900123'])
    expect(`${subject}${text}${html ?? ''}`).not.toContain(secretText);
});

test('the same refusal is told once in six hours; another one at once', async () => {
  expect((await send(withName())).status).toBe(422);
  expect((await send(withName())).status).toBe(422);
  await server.workJobs();
  const first = mails().length;
  expect(first).toBe(2);
  expect((await send('no header of ours\n1\n')).status).toBe(422);
  await server.workJobs();
  expect(mails().length).toBe(first + 2);
  server.time.now = now + 6 * 3600 + 1;
  expect((await send('no header of ours\n1\n')).status).toBe(422);
  await server.workJobs();
  expect(mails().length).toBe(first + 4);
});

test('an acceptance that is refused is told too', async () => {
  const checked = await send(`${good()}${visitLine({ arrival: now - day, departure: now - 2 * day })}\n`);
  expect(checked.status, checked.text).toBe(201);
  const accepted = await supertest(server.app.express)
    .post(logsPath)
    .set('authorization', `Bearer ${secret}`)
    .send({
      checkId: (checked.body as VisitLogCheck).checkId,
      goodRowsOnly: false,
      facts: { selectedBy: 'arrived', takenAt: now, missingDeparture: 'unknown' },
    });
  expect(accepted.status).toBe(422);
  await server.workJobs();
  expect(mails()[0].text).toContain('The file has problem rows');
  expect(mails()[0].text).toContain('The time lies before the arrival.');
});

test('what a person uploads by hand is told on the page only, and a good file by nobody', async () => {
  const byHand = await steward
    .send('post', `${logsPath}/checks`)
    .set('content-type', 'text/csv')
    .send('no header of ours\n1\n');
  expect(byHand.status).toBe(422);
  expect((await send(good())).status).toBe(201);
  expect(await server.deps.database.read.countBy(Job, { siteId: built.site.id })).toBe(0);
});

const acceptSent = async (csv: string) => {
  const checked = await send(csv);
  const { checkId } = checked.body as VisitLogCheck;
  const accepted = await supertest(server.app.express)
    .post(logsPath)
    .set('authorization', `Bearer ${secret}`)
    .send({
      checkId,
      goodRowsOnly: false,
      facts: { selectedBy: 'arrived', takenAt: now, missingDeparture: 'unknown' },
    });
  expect(accepted.status, accepted.text).toBe(202);
  return { checkId, ...(accepted.body as { logId: string; jobId: string }) };
};

test('a file that was accepted and then cannot be loaded is told of: its sender had heard that all was well', async () => {
  await server.deps.jobs.stop();
  const { checkId, logId } = await acceptSent(good());
  // The checked file is lost before it is loaded, as after a disk was cleared.
  rmSync(checkedTextFile(server.deps.config.dataDir, checkId));
  await forgetChecked(server.deps.config.dataDir, checkId);
  await server.restartJobs();
  await server.workJobs();
  const [{ subject, text }] = mails();
  expect(subject).toBe('Saltby Bay: visits not loaded');
  expect(text).toContain('Saltby Bay: a file of visits was accepted but could not be loaded.');
  expect(text).toContain('The checked file is no longer there. Send it again.');
  expect(text).toContain('Nothing of it was kept; everything loaded before is unchanged.');
  expect(text).toContain(`/sites/${built.site.id}/logs/${logId}`);
  expect(mails().length).toBe(2);
});

test('a load that a person cancels is told to nobody', async () => {
  await server.deps.jobs.stop();
  const { jobId, logId } = await acceptSent(good());
  expect(await server.deps.jobs.cancel(jobId)).toBe(true);
  await server.restartJobs();
  await server.workJobs();
  expect(await server.deps.database.read.findOneByOrFail(VisitLog, { id: logId })).toMatchObject({ status: 'failed' });
  expect(mails()).toEqual([]);
});
