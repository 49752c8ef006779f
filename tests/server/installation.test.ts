import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import type { InstallationSite } from '../../shared/api/installation.ts';
import type { PersonReply } from '../../shared/api/people.ts';
import type { Site as SiteReply } from '../../shared/api/sites.ts';
import { AuditEvent } from '../../server/entities/AuditEvent.ts';
import { CareArea } from '../../server/entities/CareArea.ts';
import { Site } from '../../server/entities/Site.ts';
import { grantAdministrator } from '../../server/features/people/grant-administrator.ts';
import { recognisePerson } from '../../server/features/sign-in/recognise-person.ts';
import { flatPlan } from '../support/build-plan.ts';
import { buildPerson } from '../support/build-site.ts';
import { buildVisitLog } from '../support/build-visit-log.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

/* An installation set up from nothing, by the product's own rules; no source outside it. */
let server: TestServer;
let admin: SignedIn;
let groupId: string;
let made: InstallationSite;

beforeAll(async () => {
  server = await openTestServer();
});
afterAll(() => server.close());

const acute = { name: 'Acute', spaceKind: 'bed', spaces: 20, safeMinimum: 8, bedStep: 2, noticeHours: 4 };
const chairs = { name: 'Chairs', spaceKind: 'chair', spaces: 12, safeMinimum: 4, bedStep: 2, noticeHours: 1 };
const place = () => ({ name: 'Saltby', groupId, timeZone: 'Europe/London', country: 'GB', region: 'ENG' });
const sitePath = () => `/api/installation/sites/${made.id}`;
const faultsOf = (body: unknown) => (body as { faults: { at: string }[] }).faults.map(({ at }) => at);

describe('from an empty database', () => {
  test('the command line’s administrator signs in and makes a group and a site', async () => {
    const { database } = server.deps;
    expect(await grantAdministrator(database, { email: 'ada@people.test' }, server.time.now)).toMatch(/first sign-in/);
    const claims = { issuer: 'https://issuer.test', subject: 'ada', name: 'Ada Min', email: 'ada@people.test' };
    const person = await database.write((manager) =>
      recognisePerson(manager, { ...claims, emailVerified: true, groups: [] }, server.time.now),
    );
    admin = await server.signedInAs(person.id);
    const group = await admin.send('post', '/api/installation/groups', { name: 'Farrowmere' });
    groupId = (group.body as { id: string }).id;
    expect((await admin.send('post', '/api/installation/groups', { name: 'farrowmere' })).status).toBe(400);
    const reply = await admin.send('post', '/api/installation/sites', { ...place(), areas: [acute, chairs] });
    expect(reply.status, reply.text).toBe(201);
    made = reply.body as InstallationSite;
    expect(made).toMatchObject({
      ...place(),
      groupName: 'Farrowmere',
      hasData: false,
      people: 0,
      hasOperations: false,
    });
    expect(made.areas.map(({ name }) => name)).toEqual(['Acute', 'Chairs']);
  });

  test('people get roles there and find a site with shifts; the administrator still reads nothing of it', async () => {
    const person = await buildPerson(server.deps.database, [], 'Olu Ops');
    const body = { role: 'operations', siteId: made.id, groupId: null, endsAt: null };
    const given = await admin.send('post', `/api/people/${person.id}/roles`, body);
    expect((given.body as PersonReply).roles).toMatchObject([{ placeName: 'Saltby' }]);
    const operations = await server.signedInAs(person.id);
    const site = (await operations.get(`/api/sites/${made.id}`)).body as SiteReply;
    expect(site.shifts.map(({ name }) => name)).toEqual(['Day', 'Night']);
    const { areas } = site;
    const rows = await server.deps.database.read.findBy(CareArea, { siteId: made.id });
    const plan = flatPlan(rows, [12, 6], 'First plan');
    expect((await operations.send('put', `/api/sites/${made.id}/staffed-beds`, plan)).status).toBe(200);
    expect(areas).toHaveLength(2);
    expect((await admin.get(`/api/sites/${made.id}`)).status).toBe(404);
    const list = (await admin.get('/api/installation/sites')).body as { sites: InstallationSite[] };
    expect(list.sites[0]).toMatchObject({ people: 1, hasOperations: true });
  });
});

describe('a site', () => {
  test('is refused with every fault at once', async () => {
    const wrong = { ...place(), name: 'Other', groupId: 'none', timeZone: 'Mars/Base', country: 'XX', region: 'YY' };
    const reply = await admin.send('post', '/api/installation/sites', { ...wrong, areas: [acute] });
    expect(reply.status).toBe(400);
    expect(faultsOf(reply.body)).toEqual(['groupId', 'timeZone', 'country']);
    const areas = [acute, { ...acute, safeMinimum: 21 }, { ...chairs, bedStep: 13, spaces: -1 }];
    const other = await admin.send('post', '/api/installation/sites', { ...place(), name: 'Other', areas });
    expect(other.status).toBe(400);
    const twins = await admin.send('post', '/api/installation/sites', {
      ...{ ...place(), name: 'Other' },
      areas: [acute, { ...acute, safeMinimum: 21 }, { ...chairs, bedStep: 13 }],
    });
    expect(faultsOf(twins.body)).toEqual(['areas.1.name', 'areas.1.safeMinimum', 'areas.2.bedStep']);
    expect((await admin.send('post', '/api/installation/sites', { ...place(), areas: [acute] })).status).toBe(400);
    expect(await server.deps.database.read.countBy(Site, {})).toBe(1);
  });

  test('changes its zone only while no data stands on it', async () => {
    const zone = { ...place(), timeZone: 'America/Toronto' };
    expect(((await admin.send('put', sitePath(), zone)).body as InstallationSite).timeZone).toBe('America/Toronto');
    expect((await admin.send('put', sitePath(), place())).status).toBe(200);
    const site = await server.deps.database.read.findOneByOrFail(Site, { id: made.id });
    const areas = await server.deps.database.read.findBy(CareArea, { siteId: made.id });
    await buildVisitLog(server.deps.database, { site, areas }, [], {
      periodFrom: 0,
      periodTo: 86_400,
      takenAt: 86_400,
    });
    expect((await admin.send('put', sitePath(), zone)).status).toBe(409);
    expect((await admin.send('put', sitePath(), { ...place(), name: 'Saltby Bay' })).status).toBe(200);
    expect((await server.deps.database.read.findOneByOrFail(Site, { id: made.id })).timeZone).toBe('Europe/London');
  });
});

describe('a care area', () => {
  const areaId = async (name: string) =>
    (await server.deps.database.read.findOneByOrFail(CareArea, { siteId: made.id, name })).id;

  test('is added, changed, and only within the plan in force; each is audited', async () => {
    const added = await admin.send('post', `${sitePath()}/areas`, { ...chairs, name: 'Children' });
    expect((added.body as InstallationSite).areas).toHaveLength(3);
    expect((await admin.send('post', `${sitePath()}/areas`, { ...chairs, name: 'children' })).status).toBe(400);
    const path = `${sitePath()}/areas/${await areaId('Acute')}`;
    const refused = await admin.send('put', path, { ...acute, spaces: 11, safeMinimum: 11 });
    expect(faultsOf(refused.body)).toEqual(['spaces']);
    const higher = await admin.send('put', path, { ...acute, safeMinimum: 13 });
    expect(faultsOf(higher.body)).toEqual(['safeMinimum']);
    expect((await admin.send('put', path, { ...acute, spaces: 22, safeMinimum: 12 })).status).toBe(200);
    const events = await server.deps.database.read.findBy(AuditEvent, { siteId: made.id, event: 'area.changed' });
    expect(events.map(({ detail }) => JSON.parse(detail) as object)).toMatchObject([{ spaces: 22, safeMinimum: 12 }]);
  });

  test('is removed only while nothing was stored for it', async () => {
    expect((await admin.send('delete', `${sitePath()}/areas/${await areaId('Children')}`)).status).toBe(409);
    const body = { ...place(), name: 'New', areas: [acute, chairs] };
    const fresh = (await admin.send('post', '/api/installation/sites', body)).body as InstallationSite;
    const remove = (id: string) => admin.send('delete', `/api/installation/sites/${fresh.id}/areas/${id}`);
    expect((await remove(fresh.areas[1].id)).status).toBe(200);
    expect((await remove(fresh.areas[0].id)).status).toBe(409);
    expect((await remove('nothing')).status).toBe(404);
  });
});

describe('the order of care areas', () => {
  let site: InstallationSite;
  let path: string;
  const names = async () =>
    ((await admin.get('/api/installation/sites')).body as { sites: InstallationSite[] }).sites
      .find(({ id }) => id === site.id)
      ?.areas.map(({ name }) => name);
  const events = () => server.deps.database.read.findBy(AuditEvent, { siteId: site.id, event: 'area.order-changed' });

  beforeAll(async () => {
    const areas = [acute, chairs, { ...acute, name: 'Resuscitation' }];
    const body = { ...place(), name: 'Ordered', areas };
    site = (await admin.send('post', '/api/installation/sites', body)).body as InstallationSite;
    path = `/api/installation/sites/${site.id}/area-order`;
  });

  test('is saved, told to the site’s own people, and audited once', async () => {
    const [first, second, third] = site.areas.map(({ id }) => id);
    const areaIds = [third, first, second];
    const reply = await admin.send('put', path, { areaIds });
    expect((reply.body as InstallationSite).areas.map(({ id }) => id)).toEqual(areaIds);
    expect(await names()).toEqual(['Resuscitation', 'Acute', 'Chairs']);
    const charge = await server.signedInAs(
      (await buildPerson(server.deps.database, [{ role: 'charge', siteId: site.id }])).id,
    );
    const own = (await charge.get(`/api/sites/${site.id}`)).body as SiteReply;
    expect(own.areas.map(({ name }) => name)).toEqual(['Resuscitation', 'Acute', 'Chairs']);
    expect((await admin.send('put', path, { areaIds })).status).toBe(200);
    expect((await events()).map(({ actor, detail }) => [actor, JSON.parse(detail) as object])).toEqual([
      ['Ada Min', { before: 'Acute, Chairs, Resuscitation', order: 'Resuscitation, Acute, Chairs' }],
    ]);
  });

  test('is refused where an area is missing, named twice, unknown or another site’s; nothing moves', async () => {
    const [first, second, third] = site.areas.map(({ id }) => id);
    const before = await names();
    expect((await admin.send('put', path, { areaIds: [first, second] })).status).toBe(409);
    expect((await admin.send('put', path, { areaIds: [first, second, third, 'nothing'] })).status).toBe(409);
    expect((await admin.send('put', path, { areaIds: [first, second, made.areas[0].id] })).status).toBe(409);
    expect(faultsOf((await admin.send('put', path, { areaIds: [first, second, second] })).body)).toEqual(['areaIds']);
    const missing = await admin.send('put', '/api/installation/sites/nothing/area-order', { areaIds: [first] });
    expect(missing.status).toBe(404);
    expect(await names()).toEqual(before);
    expect(await events()).toHaveLength(1);
  });

  test('goes on with an area that is added: it stands last', async () => {
    await admin.send('post', `/api/installation/sites/${site.id}/areas`, { ...chairs, name: 'Children' });
    expect(await names()).toEqual(['Resuscitation', 'Acute', 'Chairs', 'Children']);
  });
});

test('time zones and countries to choose from are those that the server computes with', async () => {
  const { timeZones, countries } = (await admin.get('/api/installation/places')).body as {
    timeZones: string[];
    countries: { code: string; regions: { code: string }[] }[];
  };
  expect(timeZones).toEqual(expect.arrayContaining(['UTC', 'Australia/Lord_Howe', 'Europe/London']));
  expect(countries.find(({ code }) => code === 'GB')?.regions.map(({ code }) => code)).toContain('SCT');
});
