import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import type supertest from 'supertest';
import type { Contract } from '../../shared/api/contract.ts';
import type { Session } from '../../shared/api/session.ts';
import { roles, type Role } from '../../shared/domain/permission.ts';
import { newId } from '../../server/database/new-id.ts';
import { CareArea } from '../../server/entities/CareArea.ts';
import { Census } from '../../server/entities/Census.ts';
import { Job } from '../../server/entities/Job.ts';
import { Membership } from '../../server/entities/Membership.ts';
import { Person } from '../../server/entities/Person.ts';
import { SessionRow } from '../../server/entities/SessionRow.ts';
import { Site } from '../../server/entities/Site.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

/*
 * Who may call what, written by hand from the product's table of roles and actions (the product's own rule, no source
 * outside it). Every route must stand here; one that is added without a row fails the test.
 */
const readers: Role[] = ['charge', 'operations', 'steward', 'executive'];
const bedside: Role[] = ['charge', 'operations'];
const modellers: Role[] = ['operations', 'steward'];
const planReaders: Role[] = ['charge', 'operations', 'steward'];
const table: Record<string, 'public' | 'signed-in' | 'installation' | Role[]> = {
  // Open to nobody signed in: health checks, the API description, sign-in and its callback, the session question.
  healthz: 'public',
  readyz: 'public',
  apiDescription: 'public',
  // Answers to the bearer of METRICS_TOKEN alone; 404 where none is set, as here.
  getMetrics: 'public',
  getSession: 'public',
  signIn: 'public',
  signInCallback: 'public',
  // The calendar feed, by its secret address.
  readCalendarFeed: 'public',
  signOut: 'signed-in',
  signOutEverywhere: 'signed-in',
  lockSession: 'signed-in',
  listOwnSessions: 'signed-in',
  endOwnSession: 'signed-in',
  // Read Tonight, Week ahead, Track record of own sites.
  getSite: readers,
  getTonight: readers,
  getCensus: readers,
  getOutlook: readers,
  listOutlooks: readers,
  getOutlookThen: readers,
  getNightLog: readers,
  getTrackRecord: readers,
  getTrackRecordCsv: readers,
  getDrift: readers,
  getWeekAhead: readers,
  listWeekOutlooks: readers,
  getWeekOutlook: readers,
  repeatOutlook: readers,
  getStaffedBeds: readers,
  // Enter census, acknowledge a risk, print handover.
  enterCensus: bedside,
  acknowledgeRisk: bedside,
  // Staffed beds and blocked bed spaces now.
  changeStaffedBedsNow: bedside,
  // Staffed-bed plan.
  saveStaffedBedPlan: ['operations'],
  addStaffedBedException: ['operations'],
  removeStaffedBedException: ['operations'],
  listStaffedBedPlanVersions: readers,
  getStaffedBedPlanVersion: readers,
  getRequiredBeds: readers,
  // Calendar, limits, shifts, escalation notes.
  getSiteSettings: readers,
  getLimitRecord: readers,
  getHolidayRegions: ['operations'],
  getSettingHistory: ['operations'],
  saveSiteRules: ['operations'],
  saveShifts: ['operations'],
  saveAreaSettings: ['operations'],
  addCalendarDays: ['operations'],
  removeCalendarDay: ['operations'],
  // Save and compare plans: the charge nurse and the steward read.
  getWhatIf: planReaders,
  listScenarios: planReaders,
  getScenario: planReaders,
  saveScenario: ['operations'],
  withdrawScenario: ['operations'],
  confirmScenario: ['operations'],
  cancelScenarioConfirmation: ['operations'],
  repeatScenario: ['operations'],
  // Into the staffed-bed plan.
  adoptScenario: ['operations'],
  // Who may read the calendar feed is a setting of the site.
  listCalendarFeeds: ['operations'],
  makeCalendarFeed: ['operations'],
  revokeCalendarFeed: ['operations'],
  // Upload, check, accept, withdraw a batch.
  listVisitLogs: ['steward'],
  getVisitLog: ['steward'],
  checkVisitLog: ['steward'],
  discardVisitLogCheck: ['steward'],
  getVisitLogProblemRows: ['steward'],
  getVisitLogMapping: ['steward'],
  acceptVisitLog: ['steward'],
  withdrawVisitLog: ['steward'],
  getVisitLogPresence: ['steward'],
  getVisitRetention: ['steward'],
  setVisitRetention: ['steward'],
  // Outages and diversions belong to the logs.
  listExposureGaps: ['steward'],
  declareExposureGap: ['steward'],
  removeExposureGap: ['steward'],
  // Fit a candidate model, read diagnostics.
  listArrivalModels: modellers,
  getArrivalModel: modellers,
  fitArrivalModel: modellers,
  getModelComparison: modellers,
  compareArrivalModel: modellers,
  recomputeTrackRecord: modellers,
  // Approve or retire a model.
  approveArrivalModel: ['operations'],
  retireArrivalModel: ['operations'],
  // Background work of a site: those who start it.
  listJobs: modellers,
  cancelJob: modellers,
  // Tokens for nightly upload.
  listSiteTokens: ['steward'],
  makeSiteToken: ['steward'],
  revokeSiteToken: ['steward'],
  // Read briefs; manage own subscription.
  listBriefs: ['charge', 'operations', 'executive'],
  getBrief: ['charge', 'operations', 'executive'],
  getBriefHtml: ['charge', 'operations', 'executive'],
  setSubscription: ['operations', 'executive'],
  // Send or schedule a brief, manage recipients.
  composeBrief: ['operations'],
  sendBrief: ['operations'],
  sendTestBrief: ['operations'],
  listDeliveries: ['operations'],
  resendDelivery: ['operations'],
  saveBriefSettings: ['operations'],
  listRecipients: ['operations'],
  addRecipient: ['operations'],
  removeRecipient: ['operations'],
  confirmRecipientAddress: ['operations'],
  // Subscription confirmation and unsubscription by signed link.
  showConfirmation: 'public',
  confirmRecipient: 'public',
  showUnsubscribe: 'public',
  unsubscribe: 'public',
  // What came back, from the bearer of DELIVERY_REPORT_TOKEN alone; 404 where none is set, as here.
  takeDeliveryReport: 'public',
  // On-call address.
  getOnCallAddress: ['operations'],
  setOnCallAddress: ['operations'],
  // Sites, areas, people, tokens, mail, jobs, status, backups: the installation's.
  listTokens: 'installation',
  makeToken: 'installation',
  listInstallationSites: 'installation',
  getPlaceChoices: 'installation',
  makeGroup: 'installation',
  renameGroup: 'installation',
  makeSite: 'installation',
  changeSite: 'installation',
  addArea: 'installation',
  changeArea: 'installation',
  removeArea: 'installation',
  orderAreas: 'installation',
  getServerStatus: 'installation',
  askBackup: 'installation',
  retryJob: 'installation',
  sendTestMail: 'installation',
  listPeople: 'installation',
  getPerson: 'installation',
  invitePerson: 'installation',
  withdrawInvitation: 'installation',
  giveRole: 'installation',
  changeRoleEnd: 'installation',
  removeRole: 'installation',
  endSessions: 'installation',
  makeGroupRole: 'installation',
  removeGroupRole: 'installation',
  // Audit trail: the administrator's for everything, operations' for the own site.
  listAuditEvents: 'installation',
  exportAuditEvents: 'installation',
  checkAuditChain: 'installation',
  redactAuditNote: 'installation',
  listSiteAuditEvents: ['operations'],
  exportSiteAuditEvents: ['operations'],
  checkSiteAuditChain: ['operations'],
  redactSiteAuditNote: ['operations'],
  revokeToken: 'installation',
};

let server: TestServer;
let built: BuiltSite;
let elsewhere: BuiltSite;
const people = new Map<string, Person>();

beforeAll(async () => {
  server = await openTestServer();
  const { database } = server.deps;
  built = await buildSite(database);
  elsewhere = await buildSite(database);
  people.set('no role', await buildPerson(database));
  for (const role of roles) {
    const here = role === 'administrator' ? { role } : { role, siteId: built.site.id };
    people.set(role, await buildPerson(database, [here]));
    if (role === 'administrator') continue;
    people.set(`${role} elsewhere`, await buildPerson(database, [{ role, siteId: elsewhere.site.id }]));
  }
});
afterAll(() => server.close());

/** Calls a route with an address of the right form and an empty body; who may is answered before what is wrong with it. */
async function call(contract: Contract, person: string | null): Promise<supertest.Response> {
  const path = contract.path.replace(':siteId', built.site.id).replaceAll(/:(\w+)/g, 'nothing');
  const found = person === null ? null : people.get(person);
  // A session of its own for each call: signing out ends one.
  const client = found ? await server.signedInAs(found.id) : null;
  const request = client
    ? contract.method === 'get'
      ? client.get(path)
      : client.send(contract.method, path)
    : server.nobody()[contract.method](path);
  if (contract.streamedBody) return request.set('content-type', contract.streamedBody).send('x');
  return contract.body ? request.send({}) : request;
}

const isOtherSite = (reply: supertest.Response) =>
  reply.status === 404 && reply.text.includes('This site was not found');

describe('every route', () => {
  test('stands in the table, and nothing else does', () => {
    const registered = server.app.routes.contracts.map(({ id }) => id);
    expect(registered.toSorted()).toEqual(Object.keys(table).toSorted());
  });

  test('lies below its site, unless it concerns none', () => {
    for (const { id, path } of server.app.routes.contracts) {
      expect(path.startsWith('/api/sites/:siteId'), id).toBe(Array.isArray(table[id]));
    }
  });

  test.each(Object.keys(table))('%s', async (id) => {
    const contract = server.app.routes.contracts.find((each) => each.id === id);
    if (!contract) throw new Error(`${id} is not a route`);
    const allowed = table[id];
    for (const person of [null, ...people.keys()]) {
      const reply = await call(contract, person);
      const label = `${id} as ${person ?? 'nobody'}: ${reply.status} ${reply.text.slice(0, 200)}`;
      expect(reply.status, label).not.toBe(500);
      if (allowed === 'public') expect([401, 403], label).not.toContain(reply.status);
      else if (person === null) expect(reply.status, label).toBe(401);
      // One that names a record of the person's own may not find it.
      else if (allowed === 'signed-in') {
        expect(contract.path.includes(':') ? [401, 403] : [401, 403, 404], label).not.toContain(reply.status);
      } else if (allowed === 'installation') {
        if (person === 'administrator') expect([401, 403], label).not.toContain(reply.status);
        else expect(reply.status, label).toBe(403);
      } else if (!readers.includes(person as Role)) expect(isOtherSite(reply), label).toBe(true);
      else if (!allowed.includes(person as Role)) expect(reply.status, label).toBe(403);
      else expect([401, 403].includes(reply.status) || isOtherSite(reply), label).toBe(false);
    }
  });

  test('a site that is not there answers as another’s does', async () => {
    const charge = await server.signedInAs(people.get('charge')!.id);
    const missing = await charge.get('/api/sites/nothing');
    const others = await charge.get(`/api/sites/${elsewhere.site.id}`);
    const known = (reply: supertest.Response) => ({ ...(JSON.parse(reply.text) as object), requestId: '' });
    expect(known(missing)).toEqual(known(others));
  });
});

describe('roles', () => {
  const sitePath = () => `/api/sites/${built.site.id}`;

  test('one that is taken away or has ended is refused at the next request of the same session', async () => {
    const { database } = server.deps;
    const person = await buildPerson(database, [
      { role: 'charge', siteId: built.site.id },
      { role: 'operations', siteId: built.site.id, endsAt: server.time.now + 10 },
    ]);
    const client = await server.signedInAs(person.id);
    const models = `${sitePath()}/arrival-models`;
    expect((await client.get(models)).status).toBe(200);
    server.time.now += 10;
    expect((await client.get(models)).status).toBe(403);
    expect((await client.get(sitePath())).status).toBe(200);
    await database.write((manager) => manager.delete(Membership, { personId: person.id, role: 'charge' }));
    expect((await client.get(sitePath())).status).toBe(404);
    const session = (await client.get('/api/session')).body as Session;
    expect(session.sites).toEqual([]);
    await database.write(async (manager) => {
      await manager.delete(Membership, { personId: person.id });
      await manager.delete(Person, { id: person.id });
    });
    expect((await client.get(sitePath())).status).toBe(401);
  });

  test('one over a health group stands at each of its sites and nowhere else', async () => {
    const { database } = server.deps;
    const second = await database.write((manager) =>
      manager.save(manager.create(Site, { ...built.site, id: newId(), name: 'Second site of the group' })),
    );
    const person = await buildPerson(database, [{ role: 'executive', groupId: built.site.groupId }]);
    const client = await server.signedInAs(person.id);
    for (const siteId of [built.site.id, second.id])
      expect((await client.get(`/api/sites/${siteId}`)).status).toBe(200);
    expect((await client.get(`/api/sites/${elsewhere.site.id}`)).status).toBe(404);
    const session = (await client.get('/api/session')).body as Session;
    expect(session.sites.map(({ id }) => id).sort()).toEqual([built.site.id, second.id].sort());
    expect(session.sites[0].permissions).toEqual(['outlook:read', 'brief:read', 'brief:subscribe']);
  });

  test('several at one site add up; an administrator gains no reading of a site', async () => {
    const both = await buildPerson(server.deps.database, [
      { role: 'charge', siteId: built.site.id },
      { role: 'steward', siteId: built.site.id },
      { role: 'administrator' },
    ]);
    const client = await server.signedInAs(both.id);
    expect((await client.get(`${sitePath()}/visit-logs`)).status).toBe(200);
    expect((await client.send('post', `${sitePath()}/censuses`, {})).status).toBe(400);
    expect((await client.get(`/api/sites/${elsewhere.site.id}`)).status).toBe(404);
    const session = (await client.get('/api/session')).body as Session;
    expect(session.installationRoles).toEqual(['administrator']);
    expect(session.installationPermissions).toEqual(['audit-log:read-all', 'installation:administer']);
  });

  test('only a steward cancels a job that concerns visit logs', async () => {
    const job = {
      id: newId(),
      kind: 'visit-log.import',
      title: 'Load',
      siteId: built.site.id,
      payload: '{}',
      status: 'queued' as const,
      attempts: 0,
      maxAttempts: 1,
      runAfter: server.time.now,
      leaseUntil: null,
      progress: 0,
      progressText: '',
      error: null,
      createdBy: 'Test',
      createdAt: server.time.now,
      startedAt: null,
      endedAt: null,
    };
    await server.deps.database.write((manager) => manager.insert(Job, job));
    const path = `${sitePath()}/jobs/${job.id}/cancel`;
    const operations = await server.signedInAs(people.get('operations')!.id);
    expect((await operations.send('post', path)).status).toBe(403);
    const steward = await server.signedInAs(people.get('steward')!.id);
    expect((await steward.send('post', path)).body).toMatchObject({ id: job.id, status: 'cancelled' });
    expect((await steward.send('post', path)).status).toBe(409);
  });
});

describe('the session’s cookie', () => {
  test.each([
    ['with another signature', (cookie: string) => cookie.replace(/.$/, (last) => (last === 'A' ? 'B' : 'A'))],
    [
      'of another session id',
      (cookie: string) => cookie.replace(/s%3A(.)/, (_, first) => `s%3A${first === 'a' ? 'b' : 'a'}`),
    ],
    ['without a signature', (cookie: string) => cookie.replace(/\..*/, '')],
    ['that is empty', () => 'shoalmark='],
  ])('%s is nobody’s', async (_, tamper) => {
    const { cookie } = await server.signedInAs(people.get('charge')!.id);
    expect(tamper(cookie)).not.toBe(cookie);
    const ask = (with_: string) => server.nobody().get('/api/session').set('cookie', with_);
    expect(((await ask(cookie)).body as Session).person).not.toBeNull();
    expect(((await ask(tamper(cookie))).body as Session).person).toBeNull();
  });

  test('is nobody’s once it has run out, and is swept', async () => {
    const client = await server.signedInAs(people.get('charge')!.id);
    const session = async () => ((await client.get('/api/session')).body as Session).person;
    expect(await session()).not.toBeNull();
    const sid = /s%3A(\w+)/.exec(client.cookie)?.[1];
    await server.deps.database.write((manager) => manager.update(SessionRow, { sid }, { expiresAt: 1 }));
    expect(await session()).toBeNull();
    await server.sessions.sweep();
    expect(await server.deps.database.read.existsBy(SessionRow, { sid })).toBe(false);
  });

  test('ends at a fixed time: no use moves its end on', async () => {
    const client = await server.signedInAs(people.get('charge')!.id);
    const sid = /s%3A(\w+)/.exec(client.cookie)?.[1];
    const endsAt = async () => (await server.deps.database.read.findOneByOrFail(SessionRow, { sid })).expiresAt;
    const first = await endsAt();
    for (const use of ['0', '1', '1']) await client.get('/api/session').set('x-use', use);
    expect(await endsAt()).toBe(first);
  });
});

describe('a writing request without the session’s own anti-forgery token', () => {
  let charge: SignedIn;
  let other: SignedIn;
  let body: object;
  const path = () => `/api/sites/${built.site.id}/censuses`;
  const post = (cookie: string, token: string | null) => {
    const request = server.nobody().post(path()).set('cookie', cookie);
    return (token === null ? request : request.set('x-csrf-token', token)).send(body);
  };

  beforeAll(async () => {
    charge = await server.signedInAs(people.get('charge')!.id);
    other = await server.signedInAs(people.get('charge')!.id);
    const area = await server.deps.database.read.findOneByOrFail(CareArea, { siteId: built.site.id });
    body = {
      takenAt: server.time.now,
      areas: [{ areaId: area.id, present: 1, waiting: 0, boarding: 0 }],
      undecidedWaiting: null,
      ambulancesHolding: null,
      arrivalsSinceMidnight: null,
    };
  });

  test('is refused and stores nothing: none, an empty one, a cut one, another session’s', async () => {
    for (const token of [null, '', charge.csrfToken.slice(1), `${charge.csrfToken}=`, other.csrfToken]) {
      const reply = await post(charge.cookie, token);
      expect(reply.status).toBe(403);
      expect(reply.text).toContain('anti-forgery token');
    }
    expect(await server.deps.database.read.countBy(Census, { siteId: built.site.id })).toBe(0);
  });

  test('with it, the request is taken; the token is the one that the session question tells', async () => {
    const { csrfToken } = (await charge.get('/api/session')).body as Session;
    expect(csrfToken).toBe(charge.csrfToken);
    expect((await post(charge.cookie, csrfToken)).status).toBe(201);
  });

  test('reading needs none', async () => {
    expect((await server.nobody().get(`/api/sites/${built.site.id}`).set('cookie', charge.cookie)).status).toBe(200);
  });
});
