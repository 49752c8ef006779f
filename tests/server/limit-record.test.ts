import { afterAll, beforeAll, expect, test } from 'vitest';
import type { DemoVisit } from '../../demo/make-visit-log.ts';
import type { LimitRecordReply } from '../../shared/api/site-settings.ts';
import { newId } from '../../server/database/new-id.ts';
import type { ArrivalModelRow } from '../../server/entities/ArrivalModelRow.ts';
import { ExposureGapRow } from '../../server/entities/ExposureGapRow.ts';
import { OutlookRow } from '../../server/entities/OutlookRow.ts';
import { StaffedBedPlan } from '../../server/entities/StaffedBedPlan.ts';
import { fitModel, giveModel } from '../support/build-model.ts';
import { flatPlan } from '../support/build-plan.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { buildVisitLog, inventVisits } from '../support/build-visit-log.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

/** A Monday, 12:00 in London (BST, UTC+1); eight weeks back the clock did not change. */
const now = Date.parse('2026-09-21T11:00:00Z') / 1000;
const hour = 3600;
const day = 86_400;
/** Nights of a built site: 21:00 to 07:30 local. */
const nightFrom = (back: number) => Date.parse('2026-09-20T20:00:00Z') / 1000 - back * day;
const hoursOfNight = Array.from({ length: 11 }, (_, index) => index * hour);

let server: TestServer;
let built: BuiltSite;
let operations: SignedIn;
let visits: DemoVisit[];
let fitted: ArrivalModelRow;
let path: string;

beforeAll(async () => {
  server = await openTestServer({ now, config: { threads: 2 } });
  const { database } = server.deps;
  fitted = await fitModel(server, await buildSite(database), 10);
  built = await buildSite(database);
  const siteId = built.site.id;
  path = `/api/sites/${siteId}`;
  operations = await server.signedInAs((await buildPerson(database, [{ role: 'operations', siteId }])).id);
  const from = now - 70 * day;
  visits = inventVisits(built, from, now);
  await buildVisitLog(database, built, visits, { periodFrom: from, periodTo: now + day, takenAt: now });
  await giveModel(database, fitted, built);
  await operations.send('put', `${path}/staffed-beds`, flatPlan(built.areas, [11, 4]));
  await server.issuer.settle();
  // The plan was in force all the time.
  await database.write((manager) => manager.update(StaffedBedPlan, { siteId }, { savedAt: from }));
});
afterAll(() => server.close());

const record = async () => (await operations.get(`${path}/settings/limit-record`)).body as LimitRecordReply;
const present = (areaId: string, at: number) =>
  visits.filter(
    (visit) =>
      visit.areaId === areaId && visit.arrivalAt <= at && (visit.departureAt === null || visit.departureAt > at),
  ).length;

async function giveNightOutlook(
  issuedAt: number,
  night: number,
  chances: [number, number],
  counted = true,
): Promise<void> {
  const model = await server.deps.database.read.query<{ id: string }[]>(
    'SELECT id FROM arrival_model WHERE siteId = ? LIMIT 1',
    [built.site.id],
  );
  const hours = [night - hour, ...hoursOfNight.map((after) => night + after), night + 11 * hour];
  const cells = (chance: number) => hours.map((_, index) => ({ chance: index === 3 ? chance : 0.01, se: 0 }));
  const result = {
    hours,
    areas: built.areas.map(({ id }, index) => ({
      areaId: id,
      counted,
      shortfall: cells(chances[index]),
      shortfallWithin: cells(chances[index] + 0.05),
    })),
  };
  await server.deps.database.write((manager) =>
    manager.insert(OutlookRow, {
      id: newId(),
      siteId: built.site.id,
      issuedAt,
      trigger: 'timetable',
      modelId: model[0].id,
      seed: 1,
      replications: 1,
      engineVersion: 'test',
      softwareVersion: 'test',
      computeMilliseconds: 0,
      input: JSON.stringify({ areas: built.areas.map(({ id, spaces }) => ({ areaId: id, spaces })) }),
      result: JSON.stringify(result),
      digest: 'test',
    }),
  );
}

// The truth is counted here from the visits themselves, one by one.
test('eight weeks of nights say whether each area ran short, as its visits tell', async () => {
  const { areas, from, to } = await record();
  expect([from, to]).toEqual([nightFrom(55), nightFrom(0) + 10.5 * hour]);
  let short = 0;
  for (const [index, { areaId, nights }] of areas.entries()) {
    expect(nights).toHaveLength(56);
    expect(nights.at(-1)?.date).toBe('2026-09-20');
    for (const [back, night] of nights.toReversed().entries()) {
      const start = nightFrom(back);
      const expected = hoursOfNight.some((after) => present(areaId, start + after) > [11, 4][index]);
      expect(night.ranShort, `${areaId} ${night.date}`).toBe(expected);
      expect(night.chance).toBeNull();
      if (expected) short += 1;
    }
  }
  // The plan was chosen so that the test sees both.
  expect(short).toBeGreaterThan(5);
  expect(short).toBeLessThan(100);
});

test('the outlook that stood when the night began speaks for it: highest printed hour, within the hour in a small area', async () => {
  await giveNightOutlook(nightFrom(3) - 20 * 60, nightFrom(3), [0.4, 0.1]);
  await giveNightOutlook(nightFrom(3) - 2 * hour, nightFrom(3), [0.9, 0.9]);
  // Too late for its night, too old for its night, without a census.
  await giveNightOutlook(nightFrom(5) + hour, nightFrom(5), [0.9, 0.9]);
  await giveNightOutlook(nightFrom(7) - 13 * hour, nightFrom(7), [0.9, 0.9]);
  await giveNightOutlook(nightFrom(9) - hour, nightFrom(9), [0.9, 0.9], false);
  const { areas } = await record();
  const chances = areas.map(({ nights }) => [3, 5, 7, 9].map((back) => nights.at(-1 - back)?.chance));
  expect(chances[0]).toEqual([0.4, null, null, null]);
  expect(chances[1][0]).toBeCloseTo(0.15, 10);
  expect(chances[1].slice(1)).toEqual([null, null, null]);
});

test('a night with an outage is not known, unless it ran short in its other hours', async () => {
  const back = 20;
  await server.deps.database.write((manager) =>
    manager.insert(ExposureGapRow, {
      id: newId(),
      siteId: built.site.id,
      areaId: null,
      fromAt: nightFrom(back),
      untilAt: nightFrom(back) + 11 * hour,
      reason: 'Upgrade',
    }),
  );
  const { areas } = await record();
  expect(areas.map(({ nights }) => nights.at(-1 - back)?.ranShort)).toEqual([null, null]);
});

test('a changed limit asks for a new outlook; what was issued before stays to the letter', async () => {
  const rows = () =>
    server.deps.database.read.query<{ id: string; trigger: string; digest: string; input: string; result: string }[]>(
      'SELECT id, "trigger", digest, input, result FROM outlook WHERE siteId = ? ORDER BY rowid',
      [built.site.id],
    );
  const before = await rows();
  const [acute] = built.areas;
  const values = {
    alertLimit: 0.4,
    escalationNote: acute.escalationNote,
    bedStep: 1,
    noticeHours: 2,
    bedsPerNurse: null,
    lendsTo: [],
  };
  const put = async (body: object) =>
    (await operations.send('put', `${path}/settings/areas`, body)).body as { outlookId: string | null };
  const { outlookId } = await put({ revision: 0, areas: [{ id: acute.id, ...values }] });
  const after = await rows();
  expect(after.slice(0, before.length)).toEqual(before);
  expect(after.slice(before.length).map(({ id, trigger }) => [id, trigger])).toEqual([[outlookId, 'settings changed']]);
  const input = JSON.parse(after.at(-1)!.input) as { areas: { areaId: string; alertLimit: number }[] };
  expect(input.areas.find(({ areaId }) => areaId === acute.id)?.alertLimit).toBe(0.4);
  // A text changes no figure: nothing is computed for it.
  const text = { ...values, escalationNote: 'Call the duty manager.' };
  expect(await put({ revision: 1, areas: [{ id: acute.id, ...text }] })).toEqual({ revision: 2, outlookId: null });
  expect(await rows()).toHaveLength(after.length);
});
