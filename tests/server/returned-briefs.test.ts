import { afterEach, beforeEach, describe, expect, test } from 'vitest';
import type { listRecipients } from '../../shared/api/brief-recipients.ts';
import type { ReplyOf } from '../../shared/api/contract.ts';
import { AuditEvent } from '../../server/entities/AuditEvent.ts';
import { BriefDelivery } from '../../server/entities/BriefDelivery.ts';
import { BriefRecipient } from '../../server/entities/BriefRecipient.ts';
import { putOnItsWay } from '../../server/features/briefs/put-on-its-way.ts';
import { buildBrief, buildRecipients } from '../support/build-brief.ts';
import { buildDeliveryReport } from '../support/build-delivery-report.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { startMailServer, type TestMailServer } from '../support/start-mail-server.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

/*
 * Sources: RFC 3464 (form of a delivery status notification: 2.3.2 Final-Recipient, 2.3.3 Action, 2.3.4 Status, 2.3.6
 * Diagnostic-Code), RFC 3463, 2 (class 5 fails for good, class 4 for now), RFC 6750, 2.1 (the header). From memory of these.
 */
const token = 'a-token-of-the-mail-server-0123456789abcdef';
const path = '/mail/delivery-reports';
let server: TestServer;
let mail: TestMailServer;
let built: BuiltSite;
let operations: SignedIn;
let rows: BriefDelivery[];

beforeEach(async () => {
  mail = await startMailServer();
  server = await openTestServer({
    config: { smtpUrl: mail.smtpUrl, mailFrom: 'Shoalmark <brief@farrowmere.example>', deliveryReportToken: token },
  });
  const { database } = server.deps;
  built = await buildSite(database);
  operations = await server.signedInAs(
    (await buildPerson(database, [{ role: 'operations', siteId: built.site.id }], 'Olu')).id,
  );
  await buildRecipients(database, built, ['reader0@example.org', 'reader1@example.org']);
  rows = await sendOne();
});
afterEach(async () => {
  await server.close();
  await mail.close();
});

/** Sends a brief to everybody; its deliveries. */
async function sendOne(): Promise<BriefDelivery[]> {
  const { database } = server.deps;
  const brief = await buildBrief(database, built);
  await database.write((manager) => putOnItsWay(server.deps, manager, brief, 'Test'));
  await server.workJobs();
  return database.read.find(BriefDelivery, { where: { briefId: brief.id }, order: { position: 'ASC' } });
}

const idOf = (row: BriefDelivery) => `<${row.messageId}@farrowmere.example>`;
const report = (raw: string, bearer: string | null = token, type = 'message/rfc822') => {
  const request = server.nobody().post(path).set('content-type', type);
  return (bearer === null ? request : request.set('authorization', `Bearer ${bearer}`)).send(raw);
};
const deliveryOf = (row: BriefDelivery) => server.deps.database.read.findOneByOrFail(BriefDelivery, { id: row.id });
const recipients = async () =>
  ((await operations.get(`/api/sites/${built.site.id}/brief-recipients`)).body as ReplyOf<typeof listRecipients>)
    .recipients;

describe('a report that a brief could not be delivered', () => {
  test.each(['text/rfc822-headers', 'message/rfc822'] as const)('is shown beside it (%s returned)', async (returns) => {
    server.time.now += 3600;
    const reply = await report(buildDeliveryReport({ messageId: idOf(rows[0]), returns }));
    expect(reply.status, reply.text).toBe(202);
    expect(reply.body).toEqual({ outcome: 'returned for good' });
    const listed = await operations.get(`/api/sites/${built.site.id}/briefs/${rows[0].briefId}/deliveries`);
    expect(listed.body).toMatchObject({
      deliveries: [
        {
          state: 'sent',
          returnedAt: server.time.now,
          // The address that the mail server repeats is not kept a second time.
          returnedBecause: '5.1.1: 550 5.1.1 …: no such user here',
        },
        { state: 'sent', returnedAt: null, returnedBecause: null },
      ],
    });
    const brief = await operations.get(`/api/sites/${built.site.id}/briefs/${rows[0].briefId}`);
    expect(brief.body).toMatchObject({ tally: { sent: 2, returned: 1 } });
    await expect(server.deps.database.read.existsBy(AuditEvent, { event: 'brief.returned' })).resolves.toBe(true);
  });

  test('stops what is sent to the address, at every site, until somebody confirms it', async () => {
    const elsewhere = await buildSite(server.deps.database);
    const [other] = await buildRecipients(server.deps.database, elsewhere, ['reader0@example.org']);
    await report(buildDeliveryReport({ messageId: idOf(rows[0]) }));
    expect((await recipients()).map(({ state }) => state)).toEqual(['returned', 'receives']);
    const there = await server.deps.database.read.findOneByOrFail(BriefRecipient, { id: other.id });
    expect(there.returnedAt).toBe(server.time.now);

    const second = await sendOne();
    expect(second.map(({ state }) => state)).toEqual(['left out', 'sent']);
    expect(second[0].lastAnswer).toContain('came back');
    expect(mail.taken).toHaveLength(3);

    const [{ id }] = await recipients();
    const confirm = `/api/sites/${built.site.id}/brief-recipients/${id}/confirmation`;
    expect((await operations.send('post', confirm, {})).status).toBe(200);
    expect((await operations.send('post', confirm, {})).status).toBe(409);
    expect((await recipients()).map(({ state }) => state)).toEqual(['receives', 'receives']);
    expect((await sendOne()).map(({ state }) => state)).toEqual(['sent', 'sent']);
  });

  test('for now is shown, and the next brief goes out all the same', async () => {
    const raw = buildDeliveryReport({
      messageId: idOf(rows[1]),
      status: '4.4.7',
      said: '421 4.4.7 given up after 5 days',
    });
    expect((await report(raw)).body).toEqual({ outcome: 'returned for now' });
    expect((await deliveryOf(rows[1])).returnedBecause).toBe('4.4.7: 421 4.4.7 given up after 5 days');
    expect((await sendOne()).map(({ state }) => state)).toEqual(['sent', 'sent']);
  });

  test('that comes twice keeps its first time', async () => {
    const raw = buildDeliveryReport({ messageId: idOf(rows[0]) });
    await report(raw);
    const first = server.time.now;
    server.time.now += 600;
    expect((await report(raw)).status).toBe(202);
    expect((await deliveryOf(rows[0])).returnedAt).toBe(first);
  });
});

describe('anything else that comes to that address', () => {
  test.each([
    ['a delay', { action: 'delayed', status: '4.4.1' }, 'delayed'],
    ['a success', { action: 'delivered', status: '2.0.0' }, 'none of ours'],
    ['a report of another message', { messageId: '<brief-0000000000000000@farrowmere.example>' }, 'none of ours'],
    ['a report that returns nothing', { messageId: null }, 'none of ours'],
  ])('%s changes nothing', async (_name, more, outcome) => {
    const reply = await report(buildDeliveryReport({ messageId: idOf(rows[0]), ...more }));
    expect(reply.body).toEqual({ outcome });
    expect((await deliveryOf(rows[0])).returnedAt).toBeNull();
    expect((await recipients()).map(({ state }) => state)).toEqual(['receives', 'receives']);
  });

  test('an absence note, broken mail and noise are taken and change nothing', async () => {
    const note = `From: reader0@example.org\r\nIn-Reply-To: ${idOf(rows[0])}\r\nSubject: Away\r\n\r\nAction: failed\r\nStatus: 5.0.0\r\nFinal-Recipient: rfc822;x\r\n`;
    for (const raw of [
      note,
      'noise',
      buildDeliveryReport({ messageId: idOf(rows[0]) }).slice(0, 300),
      '\u0000\u0001'.repeat(500),
    ]) {
      expect((await report(raw)).body).toEqual({ outcome: 'none of ours' });
    }
    expect((await deliveryOf(rows[0])).returnedAt).toBeNull();
  });

  test('is refused without the token, empty, of another kind, or too large', async () => {
    const raw = buildDeliveryReport({ messageId: idOf(rows[0]) });
    for (const bearer of [null, '', `${token}x`, token.slice(1)]) {
      const refused = await report(raw, bearer);
      expect(refused.status).toBe(401);
      expect(refused.headers['www-authenticate']).toBe('Bearer');
    }
    expect((await report('', token)).status).toBe(415);
    expect((await report(raw, token, 'text/plain')).status).toBe(415);
    expect((await report(raw + 'x'.repeat(2_200_000))).status).toBe(413);
    expect((await deliveryOf(rows[0])).returnedAt).toBeNull();
  });
});
