import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest';
import type { BodyOf, ReplyOf } from '../../shared/api/contract.ts';
import type { listRecipients } from '../../shared/api/brief-recipients.ts';
import type { getBrief, listBriefs, saveBriefSettings } from '../../shared/api/briefs.ts';
import { AuditEvent } from '../../server/entities/AuditEvent.ts';
import { Brief } from '../../server/entities/Brief.ts';
import { BriefDelivery } from '../../server/entities/BriefDelivery.ts';
import { BriefRecipient } from '../../server/entities/BriefRecipient.ts';
import { BriefSettings } from '../../server/entities/BriefSettings.ts';
import { Job } from '../../server/entities/Job.ts';
import { Site } from '../../server/entities/Site.ts';
import { newId } from '../../server/database/new-id.ts';
import { askForDueBriefs } from '../../server/features/briefs/compose-brief.job.ts';
import type { ArrivalModelRow } from '../../server/entities/ArrivalModelRow.ts';
import { buildBrief, buildRecipients } from '../support/build-brief.ts';
import { fitModel, giveModel } from '../support/build-model.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { headerOf, startMailServer, type TestMailServer } from '../support/start-mail-server.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

type List = ReplyOf<typeof listBriefs>;
type Whole = ReplyOf<typeof getBrief>;
type Settings = BodyOf<typeof saveBriefSettings>;

/** Monday 2026-09-21, 14:13 UTC: 15:13 in London. */
const monday = 1_790_000_000;
const schedule: Settings = { scheduled: true, weekday: 1, minuteOfDay: 420, approveFirst: false, covers: 'site' };

let server: TestServer;
let mail: TestMailServer;
let model: ArrivalModelRow;
let built: BuiltSite;
let operations: SignedIn;
let executive: SignedIn;
let operationsAddress: string;

beforeAll(async () => {
  mail = await startMailServer();
  server = await openTestServer({ now: monday, config: { smtpUrl: mail.smtpUrl, mailFrom: 'x@farrowmere.example' } });
  model = await fitModel(server, await buildSite(server.deps.database), 12);
});
afterAll(async () => {
  await server.close();
  await mail.close();
});

beforeEach(async () => {
  const { database } = server.deps;
  await server.workJobs();
  // What an earlier test left for later must not be worked in a later one.
  await database.write((manager) => manager.createQueryBuilder().delete().from(Job).execute());
  server.time.now = monday;
  mail.taken.length = 0;
  built = await buildSite(database);
  const of = (role: 'operations' | 'executive') =>
    buildPerson(database, [{ role, siteId: built.site.id }], `A ${role}`);
  const manager = await of('operations');
  operationsAddress = manager.email;
  operations = await server.signedInAs(manager.id);
  executive = await server.signedInAs((await of('executive')).id);
});

const path = (rest: string) => `/api/sites/${built.site.id}/${rest}`;
const list = async (client = operations) => (await client.get(path('briefs'))).body as List;
const recipients = async () => (await operations.get(path('brief-recipients'))).body as ReplyOf<typeof listRecipients>;
const recipientOf = (address: string) =>
  server.deps.database.read.findOneByOrFail(BriefRecipient, { siteId: built.site.id, address });
const linkIn = (raw: string, kind: string) =>
  new RegExp(`/mail/${kind}/[\\w.-]+`).exec(raw.replace(/=\r\n/g, ''))?.[0] ?? '';

describe('composing', () => {
  test('a draft tells of the site’s own figures, is kept exactly, and only who may send sees it', async () => {
    await giveModel(server.deps.database, model, built);
    const made = await operations.send('post', path('briefs'));
    expect(made.status, made.text).toBe(201);
    const { id, subject } = made.body as Whole;
    expect(subject).toContain('Test site, weekly brief: What next week needs is not known');
    const whole = (await operations.get(path(`briefs/${id}`))).body as Whole;
    expect(whole.text).toMatch(/Arrivals next week: most likely about [\d,]+, and with a chance of 8 in 10 between/);
    const html = await operations.get(path(`briefs/${id}/html`));
    expect(html.headers['content-type']).toMatch(/^text\/html/);
    expect(html.headers['content-security-policy']).toMatch(/^default-src 'none'.*sandbox/);
    expect(html.text).toContain('"data:image/png;base64,');
    expect(html.text).not.toMatch(/cid:|\{\{unsubscribe/);
    expect((await executive.get(path(`briefs/${id}`))).status).toBe(404);
    expect((await executive.get(path(`briefs/${id}/html`))).status).toBe(404);
    expect((await list(executive)).briefs).toEqual([]);
    expect((await list()).briefs.map((brief) => brief.id)).toEqual([id]);
  });

  test('without a model in use is refused with words, and nothing is stored', async () => {
    const refused = await operations.send('post', path('briefs'));
    expect(refused.status).toBe(409);
    expect(refused.text).toContain('no arrival model is in use');
    expect((await list()).briefs).toEqual([]);
  });

  test('keeps the five newest drafts', async () => {
    await giveModel(server.deps.database, model, built);
    for (let draft = 0; draft < 6; draft += 1) {
      server.time.now += 60;
      await buildBrief(server.deps.database, built, { composedAt: server.time.now });
    }
    server.time.now += 60;
    await operations.send('post', path('briefs'));
    expect((await list()).briefs).toHaveLength(5);
  });
});

describe('sending', () => {
  test('needs a recipient, then goes to each; the executive can read it, and it is not sent twice', async () => {
    const { id } = await buildBrief(server.deps.database, built);
    const nobody = await operations.send('post', path(`briefs/${id}/sending`));
    expect(nobody.status).toBe(409);
    expect(nobody.text).toContain('Add a recipient first');
    await buildRecipients(server.deps.database, built, ['a@example.org', 'b@example.org']);
    const sent = await operations.send('post', path(`briefs/${id}/sending`));
    expect(sent.status).toBe(202);
    expect((await operations.send('post', path(`briefs/${id}/sending`))).status).toBe(409);
    await server.workJobs();
    expect(mail.taken.map(({ to }) => to[0])).toEqual(['a@example.org', 'b@example.org']);
    const [brief] = (await list(executive)).briefs;
    expect(brief).toMatchObject({ id, state: 'sent', approvedBy: 'A operations', tally: { sent: 2, waiting: 0 } });
    const log = await operations.get(path(`briefs/${id}/deliveries`));
    expect((log.body as { deliveries: object[] }).deliveries).toHaveLength(2);
    await expect(
      server.deps.database.read.existsBy(AuditEvent, { event: 'brief.approved', subject: id }),
    ).resolves.toBe(true);
  });

  test('a test goes to oneself alone, without a way to unsubscribe others, and leaves the draft a draft', async () => {
    await buildRecipients(server.deps.database, built, ['a@example.org']);
    const { id } = await buildBrief(server.deps.database, built);
    const asked = await operations.send('post', path(`briefs/${id}/test`));
    expect(asked.status).toBe(202);
    await server.workJobs();
    expect(mail.taken.map(({ to }) => to)).toEqual([[operationsAddress]]);
    expect(headerOf(mail.taken[0].raw, 'Subject')).toBe('Test: Test site, weekly brief');
    expect(headerOf(mail.taken[0].raw, 'List-Unsubscribe')).toBe('');
    expect((await list()).briefs[0]).toMatchObject({ state: 'draft', tally: { sent: 0 } });
  });

  test('another site’s brief answers as if it were not there', async () => {
    const other = await buildSite(server.deps.database);
    const { id } = await buildBrief(server.deps.database, other);
    for (const rest of ['', '/html', '/deliveries'])
      expect((await operations.get(path(`briefs/${id}${rest}`))).status).toBe(404);
    expect((await operations.send('post', path(`briefs/${id}/sending`))).status).toBe(404);
  });

  test('a brief that also tells of a site of others is not shown', async () => {
    const other = await buildSite(server.deps.database);
    const { id } = await buildBrief(server.deps.database, built, {
      siteIds: [built.site.id, other.site.id],
      state: 'sent',
    });
    expect((await executive.get(path(`briefs/${id}`))).status).toBe(404);
    expect((await list(executive)).briefs).toEqual([]);
  });
});

describe('recipients', () => {
  const add = (name: string, address: string) => operations.send('post', path('brief-recipients'), { name, address });

  test('a person of the site is added at once; the list offers those who are not there yet', async () => {
    const before = await recipients();
    expect(before.people.map(({ name }) => name)).toEqual(['A executive', 'A operations']);
    const [{ address }] = before.people;
    const added = await add('whatever', address.toUpperCase().replace('PEOPLE.TEST', 'people.test').toLowerCase());
    expect(added.body).toMatchObject({ kind: 'person', state: 'receives', name: 'A executive' });
    expect((await recipients()).people.map(({ name }) => name)).toEqual(['A operations']);
    expect((await add('again', address)).status).toBe(409);
  });

  test('an outside address is asked, gets nothing before, and confirms by its link; a GET changes nothing', async () => {
    const added = await add('Board office', 'board@trust.example');
    expect(added.body).toMatchObject({ kind: 'outside', state: 'asked' });
    await server.workJobs();
    expect(mail.taken.map(({ to }) => to)).toEqual([['board@trust.example']]);
    const link = linkIn(mail.taken[0].raw, 'confirm');
    const { id } = await buildBrief(server.deps.database, built);
    expect((await operations.send('post', path(`briefs/${id}/sending`))).status).toBe(409);
    const page = await server.nobody().get(link);
    expect(page.status).toBe(200);
    expect(page.text).toContain('Yes, send it to me');
    expect((await recipientOf('board@trust.example')).confirmedAt).toBeNull();
    const done = await server.nobody().post(link);
    expect(done.text).toContain('Confirmed');
    expect((await recipientOf('board@trust.example')).confirmedAt).toBe(server.time.now);
    expect((await operations.send('post', path(`briefs/${id}/sending`))).status).toBe(202);
    await server.workJobs();
    expect(mail.taken[1].to).toEqual(['board@trust.example']);
  });

  test('a confirmation runs out, is replaced by a newer one, and cannot be made up or used for something else', async () => {
    await add('Board office', 'board@trust.example');
    await server.workJobs();
    const link = linkIn(mail.taken[0].raw, 'confirm');
    const tampered = link.replace(/.$/, (last) => (last === 'A' ? 'B' : 'A'));
    for (const wrong of [tampered, link.replace('/confirm/', '/unsubscribe/'), '/mail/confirm/nothing.of.that']) {
      expect((await server.nobody().post(wrong)).status, wrong).toBe(404);
    }
    server.time.now += 14 * 86_400 + 1;
    expect((await server.nobody().post(link)).status).toBe(404);
    await add('Board office', 'board@trust.example');
    await server.workJobs();
    server.time.now -= 86_400;
    expect((await server.nobody().post(link)).status).toBe(404);
    expect((await recipientOf('board@trust.example')).confirmedAt).toBeNull();
    expect((await server.nobody().post(linkIn(mail.taken[1].raw, 'confirm'))).status).toBe(200);
  });

  test.each([
    ['a header in the name', 'Board\r\nBcc: all@h.example', 'board@trust.example', 'name'],
    ['markup in the name', 'Board <all@h.example>', 'board@trust.example', 'name'],
    ['two addresses', 'Board', 'a@trust.example, b@trust.example', 'address'],
    ['a header in the address', 'Board', 'a@trust.example\r\nBcc: b@trust.example', 'address'],
    ['no domain', 'Board', 'board', 'address'],
    ['an internationalised domain that is none', 'Board', 'a@xn--.example', 'address'],
  ])('%s is refused and stores nothing', async (_, name, address, at) => {
    const refused = await add(name, address);
    expect(refused.status).toBe(400);
    expect(JSON.parse(refused.text)).toMatchObject({ faults: [{ at }] });
    expect((await recipients()).recipients).toEqual([]);
  });

  test('an internationalised address is taken, in its one way of writing', async () => {
    expect((await add('Leitung', 'leitung@KLINIK-MÜNCHEN.example')).body).toMatchObject({
      address: 'leitung@klinik-münchen.example',
    });
  });

  test('unsubscribing: a GET shows a page, a POST in one click does it, without a session, whoever is signed in', async () => {
    await buildRecipients(server.deps.database, built, ['a@example.org', 'b@example.org']);
    const { id } = await buildBrief(server.deps.database, built);
    await operations.send('post', path(`briefs/${id}/sending`));
    await server.workJobs();
    const link = new URL(headerOf(mail.taken[0].raw, 'List-Unsubscribe').slice(1, -1)).pathname;
    const page = await server.nobody().get(link);
    expect(page.text).toContain('Nothing has changed yet');
    expect(page.text).toMatch(/<form method="post"><button/);
    expect((await recipientOf('a@example.org')).unsubscribedAt).toBeNull();
    // RFC 8058, 3.2: the mail program posts this and nothing of a session; here it even comes with somebody else's cookie.
    const done = await server
      .nobody()
      .post(link)
      .set('cookie', operations.cookie)
      .type('form')
      .send('List-Unsubscribe=One-Click');
    expect(done.status).toBe(200);
    expect(done.text).toContain('Unsubscribed');
    expect((await recipientOf('a@example.org')).unsubscribedAt).toBe(server.time.now);
    expect((await server.nobody().post(link)).status).toBe(200);
    const next = await buildBrief(server.deps.database, built, { composedAt: server.time.now + 1 });
    await operations.send('post', path(`briefs/${next.id}/sending`));
    await server.workJobs();
    expect(mail.taken.slice(2).map(({ to }) => to)).toEqual([['b@example.org']]);
    expect((await recipients()).recipients.map(({ state }) => state)).toEqual(['unsubscribed', 'receives']);
  });

  test('who unsubscribed is not subscribed by somebody else, but may subscribe again', async () => {
    await executive.send('put', path('brief-subscription'), { subscribed: true });
    const [own] = (await recipients()).recipients;
    expect(own).toMatchObject({ kind: 'person', state: 'receives' });
    await executive.send('put', path('brief-subscription'), { subscribed: false });
    const refused = await add(own.name, own.address);
    expect(refused.status).toBe(409);
    expect(refused.text).toContain('has unsubscribed');
    expect((await list(executive)).subscription).toEqual({ subscribed: false, address: own.address });
    await executive.send('put', path('brief-subscription'), { subscribed: true });
    expect((await list(executive)).subscription).toEqual({ subscribed: true, address: own.address });
  });

  test('one that is removed is gone from the list, and may be added again', async () => {
    const { body } = await add('Board office', 'board@trust.example');
    const { id } = body as { id: string };
    expect((await operations.send('delete', path(`brief-recipients/${id}`))).status).toBe(204);
    expect((await operations.send('delete', path(`brief-recipients/${id}`))).status).toBe(404);
    expect((await recipients()).recipients).toEqual([]);
    expect((await add('Board office', 'board@trust.example')).body).toMatchObject({ id, state: 'asked' });
  });
});

describe('the schedule', () => {
  const save = (change: Partial<Settings> = {}) =>
    operations.send('put', path('brief-settings'), { ...schedule, ...change });
  const compositions = () => server.deps.database.read.findBy(Job, { siteId: built.site.id, kind: 'brief.compose' });
  const nextMonday = Date.parse('2026-09-28T06:00:00Z') / 1000;

  test('starts with the next due time, in the site’s own zone; what was due before is not made up for', async () => {
    const saved = await save();
    expect(saved.status, saved.text).toBe(200);
    expect(saved.body).toMatchObject({ nextDueAt: nextMonday });
    await askForDueBriefs(server.deps);
    expect(await compositions()).toEqual([]);
    server.time.now = nextMonday - 1;
    await askForDueBriefs(server.deps);
    expect(await compositions()).toEqual([]);
    server.time.now = nextMonday;
    await askForDueBriefs(server.deps);
    await askForDueBriefs(server.deps);
    expect(await compositions()).toHaveLength(1);
  });

  test('after weeks of downtime catches up once', async () => {
    await giveModel(server.deps.database, model, built);
    await buildRecipients(server.deps.database, built, ['a@example.org']);
    await save();
    server.time.now = nextMonday + 5 * 7 * 86_400 + 3600;
    for (let look = 0; look < 3; look += 1) await askForDueBriefs(server.deps);
    expect(await compositions()).toHaveLength(1);
    await workThrough();
    expect(mail.taken.map(({ to }) => to)).toEqual([['a@example.org']]);
    const [brief] = (await list()).briefs;
    expect(brief).toMatchObject({ state: 'sent', composedBy: 'the timetable', tally: { sent: 1 } });
    // The clocks went back on 25 October: Monday 07:00 is 07:00 UTC now.
    expect(brief.scheduledFor).toBe(Date.parse('2026-11-02T07:00:00Z') / 1000);
  });

  test('a brief that waits for approval is not sent before', async () => {
    await giveModel(server.deps.database, model, built);
    await buildRecipients(server.deps.database, built, ['a@example.org']);
    await save({ approveFirst: true });
    server.time.now = nextMonday;
    await askForDueBriefs(server.deps);
    await workThrough();
    expect(mail.taken).toHaveLength(0);
    const [brief] = (await list()).briefs;
    expect(brief.state).toBe('awaiting approval');
    expect((await operations.send('post', path(`briefs/${brief.id}/sending`))).status).toBe(202);
    await server.workJobs();
    expect(mail.taken).toHaveLength(1);
  });

  test('a job that runs again after a crash does not compose a second time', async () => {
    await giveModel(server.deps.database, model, built);
    await save();
    server.time.now = nextMonday;
    await askForDueBriefs(server.deps);
    await workThrough();
    const [job] = await compositions();
    await server.deps.database.write((manager) =>
      manager.update(Job, { id: job.id }, { status: 'queued', attempts: 1 }),
    );
    await workThrough();
    await expect(server.deps.database.read.countBy(Brief, { siteId: built.site.id })).resolves.toBe(1);
  });

  test('for a site without a model the failure is shown with its words', async () => {
    await save();
    server.time.now = nextMonday;
    await askForDueBriefs(server.deps);
    await server.workJobs();
    const { failure, briefs } = await list(executive);
    expect(briefs).toEqual([]);
    expect(failure?.error).toContain('no arrival model is in use');
  });

  test('of the whole group only by who may send at each of its sites; then it has a section for each', async () => {
    expect((await save({ covers: 'group' })).status).toBe(200);
    const second = await server.deps.database.write((manager) =>
      manager.save(manager.create(Site, { ...built.site, id: newId(), name: 'Second site' })),
    );
    const refused = await save({ covers: 'group' });
    expect(refused.status).toBe(400);
    expect(JSON.parse(refused.text)).toMatchObject({ faults: [{ at: 'covers' }] });
    const both = await buildPerson(server.deps.database, [
      { role: 'operations', siteId: built.site.id },
      { role: 'operations', siteId: second.id },
    ]);
    const client = await server.signedInAs(both.id);
    expect((await client.send('put', path('brief-settings'), { ...schedule, covers: 'group' })).status).toBe(200);
    await giveModel(server.deps.database, model, built);
    const made = await client.send('post', path('briefs'));
    expect(made.status, made.text).toBe(201);
    const whole = (await client.get(path(`briefs/${(made.body as Whole).id}`))).body as Whole;
    expect(whole.siteIds.toSorted()).toEqual([built.site.id, second.id].toSorted());
    expect(whole.text).toContain('SECOND SITE\nNothing can be forecast: no arrival model is in use.');
    // The first one's manager may not read the second site: for them it is not there.
    expect((await operations.send('post', path('briefs'))).status).toBe(403);
    expect((await operations.get(path(`briefs/${whole.id}`))).status).toBe(404);
  });

  test.each([[{ weekday: 8 }], [{ minuteOfDay: 421 }], [{ minuteOfDay: 1440 }], [{ covers: 'all' }]])(
    '%j is refused',
    async (change) => {
      expect((await save(change as Partial<Settings>)).status).toBe(400);
      expect(await server.deps.database.read.existsBy(BriefSettings, { siteId: built.site.id })).toBe(false);
    },
  );

  /** Works the queue, moving the clock on to what waits a little. */
  async function workThrough(): Promise<void> {
    for (let round = 0; round < 12; round += 1) {
      await server.workJobs();
      const waiting = await server.deps.database.read.findOneBy(Job, { siteId: built.site.id, status: 'queued' });
      if (!waiting) return;
      server.time.now = Math.max(server.time.now, waiting.runAfter);
    }
  }
});

test('500 recipients get it once each, in order', async () => {
  const addresses = Array.from({ length: 500 }, (_, index) => `r${String(index)}@example.org`);
  await buildRecipients(server.deps.database, built, addresses);
  const { id } = await buildBrief(server.deps.database, built);
  await operations.send('post', path(`briefs/${id}/sending`));
  await server.workJobs();
  expect(mail.taken.map(({ to }) => to[0])).toEqual(addresses);
  await expect(server.deps.database.read.countBy(BriefDelivery, { briefId: id, state: 'sent' })).resolves.toBe(500);
});
