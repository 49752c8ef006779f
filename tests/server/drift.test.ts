import { afterAll, beforeAll, expect, test } from 'vitest';
import type { TrackRecord } from '../../shared/api/track-record.ts';
import type { Caution } from '../../shared/api/outlooks.ts';
import { ArrivalModelRow } from '../../server/entities/ArrivalModelRow.ts';
import { AuditEvent } from '../../server/entities/AuditEvent.ts';
import { askForWeekOutlook } from '../../server/features/week-ahead/issue-week-outlook.job.ts';
import { scoreJob } from '../../server/features/track-record/score-outlooks.job.ts';
import { fitModel } from '../support/build-model.ts';
import { flatPlan } from '../support/build-plan.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { buildVisitLog, inventVisits } from '../support/build-visit-log.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

/** Monday 2026-11-02, 20:00 at the site. */
const start = Date.parse('2026-11-02T20:00:00Z') / 1000;
const day = 86_400;
const days = 28;

let server: TestServer;
let built: BuiltSite;
let operations: SignedIn;
const path = (rest: string) => `/api/sites/${built.site.id}/${rest}`;
const said =
  /^Arrivals have run \d+ % above the forecast since the week of 2026-11-\d\d, more than chance explains\. Have the model fitted anew\.$/;

beforeAll(async () => {
  server = await openTestServer({ now: start, replications: 60 });
  const { database } = server.deps;
  built = await buildSite(database);
  operations = await server.signedInAs(
    (await buildPerson(database, [{ role: 'operations', siteId: built.site.id }])).id,
  );
  const model = await fitModel(server, built, 16);
  const plan = await operations.send('put', path('staffed-beds'), flatPlan(built.areas, [9, 4]));
  expect(plan.status, plan.text).toBe(200);
  const approval = await operations.send('post', path(`arrival-models/${model.id}/approval`), { reason: 'Agrees' });
  expect(approval.status, approval.text).toBe(200);
  await server.issuer.settle();
  // Four weeks of evenings, each with its outlook; the logs come later, all at once.
  for (let evening = 0; evening < days; evening += 1) {
    server.time.now = start + evening * day;
    await server.issuer.issue(built.site.id, 'timetable');
  }
  await server.issuer.settle();
}, 240_000);
afterAll(() => server.close());

test('nothing is said while no log tells what came', async () => {
  const { drift } = (await operations.get(path('track-record'))).body as TrackRecord;
  expect(drift).toMatchObject({ findings: [], foundAt: null });
});

test('a third more patients than the model knows are found, and said wherever its figures stand', async () => {
  const { database } = server.deps;
  const now = start + days * day;
  server.time.now = now;
  const from = start - (start % day);
  // Every third visit comes twice, a minute apart.
  const visits = inventVisits(built, from, now, 11).flatMap((visit, index) => {
    const later = (at: number | null) => (at === null ? null : at + 60);
    const twin = {
      ...visit,
      arrivalAt: visit.arrivalAt + 60,
      bedSpaceAt: later(visit.bedSpaceAt),
      admissionDecisionAt: later(visit.admissionDecisionAt),
      departureAt: later(visit.departureAt),
    };
    return index % 3 === 0 && twin.arrivalAt < now ? [visit, twin] : [visit];
  });
  const log = await buildVisitLog(database, built, visits, { periodFrom: from, periodTo: now, takenAt: now });
  await server.workJobs();
  await database.write((manager) =>
    server.deps.jobs.enqueue(manager, scoreJob(built.site.id, log.periodFrom, log.periodTo)),
  );
  await server.workJobs();

  const inUse = await database.read.findOneByOrFail(ArrivalModelRow, { siteId: built.site.id, status: 'in use' });
  expect(inUse.driftFoundAt).not.toBeNull();
  const events = await database.read.findBy(AuditEvent, { subject: inUse.id, event: 'arrival-model.drift-found' });
  expect(events).toHaveLength(1);

  const record = (await operations.get(path('track-record'))).body as TrackRecord;
  const finding = record.drift?.findings.find(({ series }) => series === 'arrivals');
  expect(finding).toMatchObject({ kind: 'more than forecast' });
  expect(finding?.text).toMatch(said);
  expect(finding?.ratio).toBeGreaterThan(1.15);

  await server.issuer.issue(built.site.id, 'timetable');
  expect(await askForWeekOutlook(server.deps, built.site)).toBe(true);
  await server.workJobs();
  const tonight = (await operations.get(path('tonight'))).body as { cautions: Caution[] };
  const week = (await operations.get(path('week-outlooks/latest'))).body as { cautions: Caution[] };
  for (const page of [tonight, week]) {
    expect(page.cautions).toContainEqual({ kind: 'model drifted', text: finding?.text });
  }
  const brief = await operations.send('post', path('briefs'));
  expect(brief.status, brief.text).toBe(201);
  const { id } = brief.body as { id: string };
  const { text } = (await operations.get(path(`briefs/${id}`))).body as { text: string };
  expect(text.replace(/\s+/g, ' ')).toContain(finding?.text);
  const html = await operations.get(path(`briefs/${id}/html`));
  expect(html.text.replace(/\u00a0|&nbsp;|&#160;/g, ' ')).toContain('Have the model fitted anew');
}, 240_000);
