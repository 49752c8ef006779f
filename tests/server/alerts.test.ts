import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest';
import { startMailbox, type Mailbox } from '../../demo/mailbox.ts';
import { AlertSent } from '../../server/entities/AlertSent.ts';
import type { ArrivalModelRow } from '../../server/entities/ArrivalModelRow.ts';
import { AuditEvent } from '../../server/entities/AuditEvent.ts';
import { CareArea } from '../../server/entities/CareArea.ts';
import { Job } from '../../server/entities/Job.ts';
import { OutlookRow } from '../../server/entities/OutlookRow.ts';
import { Site } from '../../server/entities/Site.ts';
import { afterOutlook } from '../../server/features/alerts/after-outlook.ts';
import { formatChance, riskWord } from '../../shared/domain/risk-word.ts';
import { makeZone } from '../../shared/domain/zoned-time.ts';
import { alertSpan } from '../../shared/forecasting/outlook-alert.ts';
import type { OutlookInput, OutlookResult } from '../../shared/forecasting/outlook-types.ts';
import { fitModel, giveModel } from '../support/build-model.ts';
import { flatPlan } from '../support/build-plan.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

/** A Monday, 15:13:20 in London (BST, UTC+1): the Late shift (14:00 to 21:30) is in charge, the Night (21:00 to 07:30) is next. */
const now = Date.parse('2026-09-21T14:13:20Z') / 1000;
const hour = 3600;
const to = 'on-call@farrowmere.example';
const london = makeZone('Europe/London');

let mailbox: Mailbox;
let server: TestServer;
let fitted: ArrivalModelRow;
let built: BuiltSite;
let acute: CareArea;
let resuscitation: CareArea;
let charge: SignedIn;
let operations: SignedIn;
let path: string;

beforeAll(async () => {
  mailbox = await startMailbox({ smtpPort: 0, httpPort: 0 });
  const config = { smtpUrl: mailbox.smtpUrl, mailFrom: 'Shoalmark <planning@farrowmere.example>' };
  server = await openTestServer({ now, config });
  fitted = await fitModel(server, await buildSite(server.deps.database), 10);
});
afterAll(async () => {
  await server.close();
  await mailbox.close();
});
beforeEach(async () => {
  server.time.now = now;
  const { database } = server.deps;
  built = await buildSite(database, { name: 'Wrenhythe <General>' });
  [acute, resuscitation] = built.areas;
  const siteId = built.site.id;
  path = `/api/sites/${siteId}`;
  charge = await server.signedInAs((await buildPerson(database, [{ role: 'charge', siteId }])).id);
  operations = await server.signedInAs((await buildPerson(database, [{ role: 'operations', siteId }], 'Olu Ops')).id);
  await giveModel(database, fitted, built);
  expect((await operations.send('put', `${path}/staffed-beds`, flatPlan(built.areas, [14, 4]))).status).toBe(200);
  // Only Acute speaks up, unless a test says otherwise.
  await setLimit(resuscitation, 0.99);
});

const setLimit = (area: CareArea, alertLimit: number) =>
  server.deps.database.write((manager) => manager.update(CareArea, { id: area.id }, { alertLimit }));
const onCall = (address: string | null) => operations.send('put', `${path}/on-call-address`, { address });

/** Enters a census, which issues an outlook, and hands that to the alert; returns the outlook and the mail's job. */
async function issue(...counts: [CareArea, number][]): Promise<{ outlookId: string; jobId: string | null }> {
  const reply = await charge.send('post', `${path}/censuses`, {
    takenAt: server.time.now,
    areas: counts.map(([area, present]) => ({ areaId: area.id, present, waiting: 0, boarding: Math.min(2, present) })),
    undecidedWaiting: null,
    ambulancesHolding: null,
    arrivalsSinceMidnight: null,
  });
  expect(reply.status, reply.text).toBe(201);
  const { outlookId } = reply.body as { outlookId: string };
  return { outlookId, jobId: await afterOutlook(server.deps, outlookId) };
}
const sent = () => server.deps.database.read.findBy(AlertSent, { siteId: built.site.id });

async function readResult(outlookId: string): Promise<{ input: OutlookInput; result: OutlookResult }> {
  const row = await server.deps.database.read.findOneOrFail(OutlookRow, {
    where: { id: outlookId },
    select: { id: true, input: true, result: true },
  });
  return { input: JSON.parse(row.input) as OutlookInput, result: JSON.parse(row.result) as OutlookResult };
}

describe('the on-call address', () => {
  test('is set, told, changed and taken away by operations, with an audit row each', async () => {
    expect((await operations.get(`${path}/on-call-address`)).body).toEqual({ address: null });
    expect((await onCall(' On-Call@Farrowmere.Example ')).body).toEqual({ address: 'On-Call@farrowmere.example' });
    expect((await operations.get(`${path}/on-call-address`)).body).toEqual({ address: 'On-Call@farrowmere.example' });
    await onCall('On-Call@farrowmere.example');
    await onCall(null);
    expect((await operations.get(`${path}/on-call-address`)).body).toEqual({ address: null });
    const audited = await server.deps.database.read.findBy(AuditEvent, {
      siteId: built.site.id,
      event: 'site.on-call-address-changed',
    });
    expect(audited.map(({ actor, detail }) => [actor, JSON.parse(detail) as unknown])).toEqual([
      ['Olu Ops', { from: null, to: 'On-Call@farrowmere.example' }],
      ['Olu Ops', { from: 'On-Call@farrowmere.example', to: null }],
    ]);
  });

  test.each([
    '',
    'nobody',
    'a@h.example, b@h.example',
    'a@h.example\r\nBcc: b@h.example',
    `${'a'.repeat(300)}@h.example`,
  ])('%j is refused', async (address) => {
    const reply = await onCall(address);
    expect(reply.status).toBe(400);
    expect(JSON.stringify(reply.body)).toContain('"at":"address"');
    const site = await server.deps.database.read.findOneByOrFail(Site, { id: built.site.id });
    expect(site.onCallAddress).toBeNull();
  });
});

describe('an alert', () => {
  test('says which area, from when, how likely, what would help, and what the mail is not', async () => {
    await onCall(to);
    const { outlookId, jobId } = await issue([acute, 18], [resuscitation, 0]);
    expect(jobId).not.toBeNull();
    await server.workJobs();
    expect(await server.deps.database.read.findOneByOrFail(Job, { id: jobId! })).toMatchObject({ status: 'done' });
    const mail = mailbox.messages().find(({ headers }) => headers.some(({ value }) => value.includes(jobId!)))!;
    expect(mail.recipients).toEqual([to]);

    // Every figure of the mail against the stored outlook, read here anew.
    const { input, result } = await readResult(outlookId);
    const outlook = result.areas.find(({ areaId }) => areaId === acute.id)!;
    const { until } = alertSpan(input.shifts, now);
    expect(until).toBe(Date.parse('2026-09-22T06:30Z') / 1000);
    const span = result.hours.flatMap((at, index) => (at < until ? [{ at, ...outlook.shortfall[index], index }] : []));
    const past = span.filter(({ chance }) => chance > 0.25);
    const peak = span.reduce((most, cell) => (cell.chance > most.chance ? cell : most));
    const clock = (at: number) => new Date((at + london.offsetAt(at)) * 1000).toISOString().slice(11, 16);
    const chance = `${formatChance(peak.chance)}, ${riskWord(peak.chance).toLowerCase()}`;
    const text = mail.text!.replace(/\s+/g, ' ');
    expect(text).toContain(`Acute passes its 25 % limit from ${clock(past[0].at)} on Monday.`);
    expect(text).toContain(`The chance of a shortfall reaches ${chance}, at ${clock(peak.at)} on `);
    expect(past.some(({ index }) => outlook.bedsToAdd[index] > 0)).toBe(true);
    expect(text).toMatch(/more staffed beds? (?:at|from) \d\d:\d\d.* to the 25 % limit or under\./);
    if (outlook.boardingOut) expect(text).toMatch(/boarding patients? out by \d\d:\d\d/);
    expect(text).toContain('Counted at 15:13: 18 present, 0 waiting, 2 boarding.');
    expect(text).toContain('may be late and is not a pager');
    expect(text).toContain('Planning aid. Not for decisions about any individual patient.');
    expect(text).toContain(`http://127.0.0.1:4310/sites/${built.site.id}/tonight`);
    expect(text).not.toContain('Resuscitation');
    expect(mail.subject).toBe(
      `Wrenhythe <General>: Acute passes its 25 % limit from ${clock(past[0].at)} on Monday (${chance})`,
    );
    expect(mail.html).toContain(`href="http://127.0.0.1:4310/sites/${built.site.id}/tonight"`);
    expect(mail.html).toContain('Open Tonight of Wrenhythe &#60;General&#62;');
    expect(mail.html).not.toMatch(/<(?:script|style|img)/);

    const [alert] = await sent();
    expect(alert).toMatchObject({
      areaId: acute.id,
      outlookId,
      sentAt: now,
      shiftFrom: Date.parse('2026-09-21T13:00Z') / 1000,
      chance: peak.chance,
      alertLimit: 0.25,
      rearmedAt: null,
      jobId,
    });
    const audited = await server.deps.database.read.findOneByOrFail(AuditEvent, {
      event: 'alert.queued',
      subject: outlookId,
    });
    expect(JSON.parse(audited.detail)).toEqual({ areas: ['Acute'], jobId });
  });

  test('of several areas is one mail', async () => {
    await onCall(to);
    await setLimit(resuscitation, 0.25);
    const { jobId } = await issue([acute, 18], [resuscitation, 6]);
    await server.workJobs();
    const mails = mailbox.messages().filter(({ headers }) => headers.some(({ value }) => value.includes(jobId!)));
    expect(mails).toHaveLength(1);
    expect(mails[0].subject).toBe('Wrenhythe <General>: Acute and Resuscitation pass their alert limits');
    expect((await sent()).map(({ areaId }) => areaId).sort()).toEqual([acute.id, resuscitation.id].sort());
    expect(mails[0].text).toContain('It passes its 25 % limit from 16:00 on Monday.');
  });

  test('names an area without a census as not counted, and tells nothing of it', async () => {
    await onCall(to);
    await setLimit(resuscitation, 0.01);
    const { jobId } = await issue([acute, 18]);
    const job = await server.deps.database.read.findOneByOrFail(Job, { id: jobId! });
    expect(job.title).toBe('Alert to the on-call address: Acute');
    expect(job.payload).toContain('Not counted\\nResuscitation: nothing is said');
  });

  test('goes out once; again after the chance fell, and on the next shift', async () => {
    await onCall(to);
    const quiet: [CareArea, number][] = [
      [acute, 2],
      [resuscitation, 0],
    ];
    const busy: [CareArea, number][] = [
      [acute, 40],
      [resuscitation, 0],
    ];
    // Far from both: quiet stays well under it, busy well over.
    await setLimit(acute, 0.5);
    await operations.send('put', `${path}/staffed-beds`, flatPlan(built.areas, [20, 4]));
    expect((await issue(...quiet)).jobId).toBeNull();
    server.time.now = now + 600;
    expect((await issue(...busy)).jobId).not.toBeNull();
    server.time.now = now + 1200;
    const repeated = await issue(...busy);
    expect(repeated.jobId).toBeNull();
    expect(await afterOutlook(server.deps, repeated.outlookId)).toBeNull();
    server.time.now = now + 1800;
    expect((await issue(...quiet)).jobId).toBeNull();
    expect((await sent())[0].rearmedAt).toBe(now + 1800);
    server.time.now = now + 2400;
    expect((await issue(...busy)).jobId).not.toBeNull();
    server.time.now = now + 3000;
    expect((await issue(...busy)).jobId).toBeNull();
    // 21:13, the Night shift.
    server.time.now = now + 6 * hour;
    expect((await issue(...busy)).jobId).not.toBeNull();
    expect(await sent()).toHaveLength(3);
  });

  test('does not go out without an address, nor for an outlook of earlier, and is made up for by the next', async () => {
    const unasked = await issue([acute, 18], [resuscitation, 0]);
    expect(unasked.jobId).toBeNull();
    await onCall(to);
    server.time.now = now + 2 * hour;
    expect(await afterOutlook(server.deps, unasked.outlookId)).toBeNull();
    expect(await afterOutlook(server.deps, 'no such outlook')).toBeNull();
    expect(await sent()).toEqual([]);
    expect((await issue([acute, 18], [resuscitation, 0])).jobId).not.toBeNull();
  });

  test('two outlooks handed in at once are told of once', async () => {
    await onCall(to);
    const reply = await charge.send('post', `${path}/censuses`, {
      takenAt: now,
      areas: [{ areaId: acute.id, present: 18, waiting: 0, boarding: 0 }],
      undecidedWaiting: null,
      ambulancesHolding: null,
      arrivalsSinceMidnight: null,
    });
    const { outlookId } = reply.body as { outlookId: string };
    const jobs = await Promise.all([afterOutlook(server.deps, outlookId), afterOutlook(server.deps, outlookId)]);
    expect(jobs.filter((jobId) => jobId !== null)).toHaveLength(1);
    expect(await sent()).toHaveLength(1);
  });
});
