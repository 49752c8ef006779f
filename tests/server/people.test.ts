import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { IsNull } from 'typeorm';
import type { GroupRole, PersonReply } from '../../shared/api/people.ts';
import type { Session } from '../../shared/api/session.ts';
import { AuditEvent } from '../../server/entities/AuditEvent.ts';
import { Job } from '../../server/entities/Job.ts';
import { Membership } from '../../server/entities/Membership.ts';
import { Person } from '../../server/entities/Person.ts';
import { grantAdministrator } from '../../server/features/people/grant-administrator.ts';
import { readGroups, recognisePerson, type Claims } from '../../server/features/sign-in/recognise-person.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

/* Who may give which role, and that roles act at once: the product's own rules, no source outside it. */
let server: TestServer;
let built: BuiltSite;
let admin: SignedIn;
let adminPerson: Person;

beforeAll(async () => {
  server = await openTestServer({ config: { smtpUrl: 'smtp://127.0.0.1:9' } });
  built = await buildSite(server.deps.database);
  adminPerson = await buildPerson(server.deps.database, [{ role: 'administrator' }], 'Ada Min');
  admin = await server.signedInAs(adminPerson.id);
});
afterAll(() => server.close());

const claims: Claims = {
  ...{ issuer: 'https://issuer.test', subject: 'noor', name: 'Noor Example', email: 'noor@people.test' },
  ...{ emailVerified: true, groups: [] },
};
const arrive = (more: Partial<Claims> = {}) =>
  server.deps.database.write((manager) => recognisePerson(manager, { ...claims, ...more }, server.time.now));
const list = async (search = '') =>
  (await admin.get(`/api/people?search=${encodeURIComponent(search)}`)).body as {
    people: PersonReply[];
    groupRoles: GroupRole[];
  };
const give = (personId: string, body: object) =>
  admin.send('post', `/api/people/${personId}/roles`, { siteId: null, groupId: null, endsAt: null, ...body });
const invite = (email: string, name = 'Invited Person') => admin.send('post', '/api/people', { email, name });

describe('an invitation by address', () => {
  test('is mailed, carries its roles, and is bound by the first sign-in with that address verified', async () => {
    const reply = await invite(' Noor@People.test ');
    expect(reply.status).toBe(201);
    const { person } = reply.body as { person: PersonReply };
    expect(person).toMatchObject({ email: 'noor@people.test', lastSignInAt: null, emailVerified: false });
    const mail = await server.deps.database.read.findOneByOrFail(Job, { kind: 'mail.send' });
    expect(JSON.parse(mail.payload)).toMatchObject({ mail: { to: 'noor@people.test' } });
    expect((await give(person.id, { role: 'charge', siteId: built.site.id })).status).toBe(201);
    expect((await arrive({ subject: 'stranger', emailVerified: false })).id).not.toBe(person.id);
    expect((await arrive()).id).toBe(person.id);
    expect((await (await server.signedInAs(person.id)).get(`/api/sites/${built.site.id}`)).status).toBe(200);
  });

  test('of somebody who has signed in with it, or a second one, is refused; an unverified claim does not stand in its way', async () => {
    expect((await invite('noor@people.test')).status).toBe(409);
    await arrive({ subject: 'claimant', email: 'target@people.test', emailVerified: false });
    expect((await invite('target@people.test')).status).toBe(201);
    expect((await invite('target@people.test')).status).toBe(409);
    expect((await invite('no address')).status).toBe(400);
  });

  test('goes over, with its roles, to somebody who is here already and whose address becomes verified', async () => {
    const here = await arrive({ subject: 'early', email: 'early@people.test', emailVerified: false });
    const { person } = (await invite('early@people.test')).body as { person: PersonReply };
    await give(person.id, { role: 'steward', siteId: built.site.id });
    const again = await arrive({ subject: 'early', email: 'early@people.test', emailVerified: true });
    expect(again.id).toBe(here.id);
    const { people } = await list('early@people.test');
    expect(people).toHaveLength(1);
    expect(people[0].roles.map(({ role }) => role)).toEqual(['steward']);
  });

  test('can be withdrawn until somebody has signed in with it', async () => {
    const { person } = (await invite('leaving@people.test')).body as { person: PersonReply };
    await give(person.id, { role: 'charge', siteId: built.site.id });
    expect((await admin.send('delete', `/api/people/${person.id}`)).status).toBe(204);
    expect(await server.deps.database.read.countBy(Membership, { personId: person.id })).toBe(0);
    const noor = await server.deps.database.read.findOneByOrFail(Person, { subject: 'noor' });
    expect((await admin.send('delete', `/api/people/${noor.id}`)).status).toBe(409);
    expect(await server.deps.database.read.countBy(AuditEvent, { event: 'person.invitation-withdrawn' })).toBe(1);
  });
});

describe('a role', () => {
  test('acts at the next request and is gone at the next, in the same session; each step is audited', async () => {
    const person = await buildPerson(server.deps.database);
    const client = await server.signedInAs(person.id);
    const look = async () => (await client.get(`/api/sites/${built.site.id}`)).status;
    expect(await look()).toBe(404);
    const given = (await give(person.id, { role: 'charge', siteId: built.site.id })).body as PersonReply;
    expect(await look()).toBe(200);
    const path = `/api/people/${person.id}/roles/${given.roles[0].id}`;
    expect((await admin.send('put', path, { endsAt: server.time.now + 60 })).status).toBe(200);
    server.time.now += 60;
    expect(await look()).toBe(404);
    expect((await list(person.email)).people[0].roles[0]).toMatchObject({ ended: true });
    expect((await admin.send('put', path, { endsAt: null })).status).toBe(200);
    expect(await look()).toBe(200);
    expect((await admin.send('delete', path)).status).toBe(200);
    expect(await look()).toBe(404);
    const events = await server.deps.database.read.find(AuditEvent, {
      where: { subject: given.roles[0].id },
      order: { id: 'ASC' },
    });
    expect(events.map(({ event }) => event)).toEqual([
      'role.given',
      'role.end-changed',
      'role.end-changed',
      'role.taken-away',
    ]);
  });

  test.each<[string, (built: BuiltSite) => object, string]>([
    ['at no site', () => ({ role: 'charge' }), 'siteId'],
    ['at a site that is not there', () => ({ role: 'charge', siteId: 'nowhere' }), 'siteId'],
    ['an administrator’s at a site', ({ site }) => ({ role: 'administrator', siteId: site.id }), 'role'],
    ['a charge nurse’s over a group', ({ site }) => ({ role: 'charge', groupId: site.groupId }), 'groupId'],
    ['one that has ended', ({ site }) => ({ role: 'charge', siteId: site.id, endsAt: 5 }), 'endsAt'],
    ['of no kind', ({ site }) => ({ role: 'owner', siteId: site.id }), 'role'],
  ])('%s is refused', async (_, body, at) => {
    const person = await buildPerson(server.deps.database);
    const reply = await give(person.id, body(built));
    expect(reply.status).toBe(400);
    expect((reply.body as { faults: { at: string }[] }).faults.map((fault) => fault.at)).toContain(at);
    expect(await server.deps.database.read.countBy(Membership, { personId: person.id })).toBe(0);
  });

  test('over a group stands at each of its sites; the same twice is refused', async () => {
    const person = await buildPerson(server.deps.database);
    expect((await give(person.id, { role: 'executive', groupId: built.site.groupId })).status).toBe(201);
    expect((await (await server.signedInAs(person.id)).get(`/api/sites/${built.site.id}`)).status).toBe(200);
    expect((await give(person.id, { role: 'executive', groupId: built.site.groupId })).status).toBe(409);
  });

  test('of the last administrator is never taken away, and an invitation or an end date does not count as another', async () => {
    const { database } = server.deps;
    const { id } = await database.read.findOneByOrFail(Membership, { personId: adminPerson.id });
    const path = `/api/people/${adminPerson.id}/roles/${id}`;
    const { person } = (await invite('second@people.test')).body as { person: PersonReply };
    await give(person.id, { role: 'administrator' });
    const brief = await buildPerson(database, [{ role: 'administrator', endsAt: server.time.now + 9999 }]);
    expect((await admin.send('delete', path)).status).toBe(409);
    expect((await admin.send('put', path, { endsAt: server.time.now + 60 })).status).toBe(409);
    await arrive({ subject: 'second', email: 'second@people.test' });
    expect((await admin.send('put', path, { endsAt: server.time.now + 60 })).status).toBe(200);
    expect((await admin.send('put', path, { endsAt: null })).status).toBe(200);
    expect(brief.id).not.toBe(adminPerson.id);
  });
});

describe('roles by the provider’s groups', () => {
  test('hold for everybody in the group, from the next sign-in, until the rule or the group is gone', async () => {
    const person = await arrive({ subject: 'grouped', email: 'grouped@people.test', groups: ['ED nurses'] });
    const client = await server.signedInAs(person.id);
    const session = async () => (await client.get('/api/session')).body as Session;
    expect((await session()).sites).toEqual([]);
    const rule = { claim: 'ED nurses', role: 'charge', siteId: built.site.id, groupId: null };
    const made = await admin.send('post', '/api/group-roles', rule);
    expect(made.status).toBe(201);
    expect((await admin.send('post', '/api/group-roles', rule)).status).toBe(409);
    expect((await session()).sites.map(({ roles }) => roles)).toEqual([['charge']]);
    expect((await list('grouped@')).people[0].byGroups).toMatchObject([{ claim: 'ED nurses', placeName: 'Test site' }]);
    await arrive({ subject: 'grouped', email: 'grouped@people.test', groups: ['Others'] });
    expect((await session()).sites).toEqual([]);
    await arrive({ subject: 'grouped', email: 'grouped@people.test', groups: ['Others', 'ED nurses'] });
    expect((await session()).sites).toHaveLength(1);
    expect((await admin.send('delete', `/api/group-roles/${(made.body as GroupRole).id}`)).status).toBe(204);
    expect((await session()).sites).toEqual([]);
  });

  test('a claim is read as names only, whatever the provider sends', () => {
    expect(readGroups(['a', 5, '', null, 'b', 'x'.repeat(201)])).toEqual(['a', 'b']);
    expect(readGroups('one')).toEqual(['one']);
    expect(readGroups({ a: 1 })).toEqual([]);
    expect(readGroups(Array.from({ length: 999 }, (_, i) => String(i)))).toHaveLength(200);
  });
});

test('ending a person’s sessions signs every browser out at its next request', async () => {
  const person = await buildPerson(server.deps.database, [{ role: 'charge', siteId: built.site.id }]);
  const browsers = [await server.signedInAs(person.id), await server.signedInAs(person.id)];
  expect((await admin.send('post', `/api/people/${person.id}/sign-out`)).body).toEqual({ ended: 2 });
  for (const browser of browsers) expect((await browser.get(`/api/sites/${built.site.id}`)).status).toBe(401);
});

describe('the command line’s administrator', () => {
  const grant = (named: Parameters<typeof grantAdministrator>[1]) =>
    grantAdministrator(server.deps.database, named, server.time.now);

  test('is never somebody who only claims the address', async () => {
    const claimant = await arrive({ subject: 'liar', email: 'chief@people.test', emailVerified: false });
    expect(await grant({ email: 'chief@people.test' })).toMatch(/^will be an administrator/);
    expect(await server.deps.database.read.countBy(Membership, { personId: claimant.id })).toBe(0);
    const invited = await server.deps.database.read.findOneByOrFail(Person, {
      email: 'chief@people.test',
      issuer: IsNull(),
    });
    const chief = await arrive({ subject: 'chief', email: 'chief@people.test', emailVerified: true });
    expect(chief.id).toBe(invited.id);
    expect(await grant({ email: 'chief@people.test' })).toBe('is an administrator already');
  });

  test('can be named by the identity itself', async () => {
    await arrive({ subject: 'by-id', email: '', emailVerified: false });
    expect(await grant({ issuer: claims.issuer, subject: 'by-id' })).toBe('is now an administrator');
    expect(await grant({ issuer: claims.issuer, subject: 'nobody' })).toBeNull();
  });

  test('is not guessed where two verified people have the address', async () => {
    await arrive({ subject: 'twin-1', email: 'twin@people.test' });
    await arrive({ subject: 'twin-2', email: 'twin@people.test' });
    await expect(grant({ email: 'twin@people.test' })).rejects.toThrow(/2 people have signed in/);
  });
});
