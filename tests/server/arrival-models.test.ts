import { afterAll, beforeAll, beforeEach, describe, expect, test, vi } from 'vitest';
import type { ModelDetail, ModelSummary } from '../../shared/api/arrival-models.ts';
import type { Problem } from '../../shared/api/common.ts';
import { ArrivalModelRow } from '../../server/entities/ArrivalModelRow.ts';
import { AuditEvent } from '../../server/entities/AuditEvent.ts';
import { ExposureGapRow } from '../../server/entities/ExposureGapRow.ts';
import { Job } from '../../server/entities/Job.ts';
import { VisitLog } from '../../server/entities/VisitLog.ts';
import { newId } from '../../server/database/new-id.ts';
import { fitModel, giveModel } from '../support/build-model.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { buildVisitLog, inventVisits } from '../support/build-visit-log.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

const now = Date.parse('2026-09-21T14:13:20Z') / 1000;
const day = 86_400;
const today = now - (now % day);

let server: TestServer;
let first: BuiltSite;
let fitted: ArrivalModelRow;

beforeAll(async () => {
  server = await openTestServer({ now });
  first = await buildSite(server.deps.database);
  fitted = await fitModel(server, first, 10);
  expect(fitted.error).toBeNull();
});
afterAll(() => server.close());

let built: BuiltSite;
let steward: SignedIn;
let operations: SignedIn;
let models: string;

async function enterSite(at: BuiltSite) {
  const { database } = server.deps;
  const siteId = at.site.id;
  models = `/api/sites/${siteId}/arrival-models`;
  steward = await server.signedInAs((await buildPerson(database, [{ role: 'steward', siteId }], 'Sam Steward')).id);
  operations = await server.signedInAs((await buildPerson(database, [{ role: 'operations', siteId }], 'Ola')).id);
}
beforeEach(async () => {
  vi.restoreAllMocks();
  server.time.now = now;
  built = await buildSite(server.deps.database);
  await enterSite(built);
});

const find = (id: string) => server.deps.database.read.findOneByOrFail(ArrivalModelRow, { id });
const detailOf = async (id: string) => (await steward.get(`${models}/${id}`)).body as ModelDetail;
const list = async () => (await steward.get(models)).body as { models: ModelSummary[]; readyLogs: number };
const fit = (who = steward) => who.send('post', models, {});
const approve = (id: string, who = operations, reason = 'Rates as the shifts know them') =>
  who.send('post', `${models}/${id}/approval`, { reason });
const retire = (id: string, reason = 'No longer right') =>
  operations.send('post', `${models}/${id}/retirement`, { reason });
const eventsOf = async (subject: string) =>
  (await server.deps.database.read.find(AuditEvent, { where: { subject }, order: { id: 'ASC' } })).map(
    ({ event }) => event,
  );

/** A ready log of some days until now. */
async function loadDays(days: number) {
  const from = today - days * day - 3600;
  const period = { periodFrom: from, periodTo: today + day - 3600, takenAt: now };
  return buildVisitLog(server.deps.database, built, inventVisits(built, from, now), period);
}

/** Waits until nothing is queued or running, and tells how a model ended. */
async function ended(id: string): Promise<ArrivalModelRow> {
  await server.workJobs();
  return find(id);
}

describe('a fit', () => {
  test('makes a candidate with its lineage, and says who asked for it', async () => {
    await enterSite(first);
    expect(fitted).toMatchObject({ status: 'candidate', fittedBy: 'Sam Steward', fittedAt: now, trainedTo: now });
    expect(await eventsOf(fitted.id)).toEqual(['arrival-model.fit-asked', 'arrival-model.fitted']);
    const [log] = await server.deps.database.read.findBy(VisitLog, { siteId: first.site.id });
    const detail = await detailOf(fitted.id);
    expect(detail.lineage).toEqual([{ logId: log.id, fileName: log.fileName, sha256: log.sha256, rows: log.rows }]);
    expect(detail.visits).toBe(log.rows);
    expect(detail.weeksOfHistory).toBeCloseTo((now - log.periodFrom) / (7 * day), 10);
    expect((await list()).readyLogs).toBe(1);
    const [job] = (
      (await steward.get(`/api/sites/${first.site.id}/jobs`)).body as { jobs: { status: string; id: string }[] }
    ).jobs;
    expect(job).toMatchObject({ id: fitted.jobId, status: 'done', progress: 1 });
  });

  test('shows figures that are finite, and estimates within their limits', async () => {
    await enterSite(first);
    const { areas, streams, departureBlocks, variation, findings } = await detailOf(fitted.id);
    expect(areas.map(({ name }) => name)).toEqual(['Acute', 'Resuscitation']);
    for (const { ratePerHour, rateLow, rateHigh } of areas) {
      for (const figures of [ratePerHour, rateLow, rateHigh]) {
        expect(figures).toHaveLength(168);
        expect(figures.every((figure) => Number.isFinite(figure) && figure >= 0)).toBe(true);
      }
      ratePerHour.forEach((rate, hour) => {
        expect(rateLow[hour]).toBeLessThan(rate);
        expect(rateHigh[hour]).toBeGreaterThan(rate);
      });
    }
    expect(streams.length).toBeGreaterThan(4);
    for (const stream of streams) {
      const label = `${stream.areaId} ${stream.disposition}`;
      expect(stream.meanLow, label).toBeGreaterThan(0);
      expect(stream.meanLow, label).toBeLessThanOrEqual(stream.meanHours);
      expect(stream.meanHigh, label).toBeGreaterThanOrEqual(stream.meanHours);
      expect(stream.departureFactor, label).toHaveLength(departureBlocks.length);
      expect(
        stream.departureFactor.every((factor) => Number.isFinite(factor) && factor > 0),
        label,
      ).toBe(true);
      expect(stream.share, label).toBeGreaterThanOrEqual(0);
    }
    for (const area of first.areas) {
      const shares = streams.filter(({ areaId }) => areaId === area.id).reduce((sum, { share }) => sum + share, 0);
      // The shares of the dispositions that were never seen are missing, and next to nothing.
      expect(shares).toBeGreaterThan(0.98);
      expect(shares).toBeLessThanOrEqual(1 + 1e-9);
    }
    for (const value of [variation.sharedDayCv, variation.outflowCv]) expect(value).toBeGreaterThanOrEqual(0);
    for (const value of [variation.dayCorrelation, variation.outflowCorrelation])
      expect(Math.abs(value)).toBeLessThanOrEqual(1);
    for (const { name, meaning, size } of findings) {
      expect(name).not.toBe('');
      expect(meaning).not.toBe('');
      expect(`${meaning} ${size}`).not.toMatch(/NaN|Infinity|undefined|null/);
    }
    // Ten weeks are under a year.
    expect(findings.some(({ meaning, concern }) => concern && meaning.includes('Under a year'))).toBe(true);
  });

  test('agrees with counts made by hand', async () => {
    await enterSite(first);
    const { areas, streams } = await detailOf(fitted.id);
    const [log] = await server.deps.database.read.findBy(VisitLog, { siteId: first.site.id });
    const rows = await server.deps.database.read.query<{ areaCode: number; n: number; admitted: number }[]>(
      'SELECT areaCode, COUNT(*) AS n, SUM(disposition = 1) AS admitted FROM visit WHERE logNumber = ? GROUP BY areaCode ORDER BY areaCode',
      [log.number],
    );
    const weeks = (now - log.periodFrom) / (7 * day);
    rows.forEach(({ n, admitted }, index) => {
      const aWeek = areas[index].ratePerHour.reduce((sum, rate) => sum + rate, 0);
      // The level of the last weeks differs from that of all ten by a few per cent.
      expect(aWeek / (n / weeks)).toBeGreaterThan(0.85);
      expect(aWeek / (n / weeks)).toBeLessThan(1.15);
      const stream = streams.find(
        ({ areaId, disposition }) => areaId === first.areas[index].id && disposition === 'admitted',
      );
      expect(Math.abs(stream!.share - admitted / n)).toBeLessThan(0.03);
    });
  });

  test('needs an accepted log', async () => {
    const reply = await fit();
    expect(reply.status).toBe(409);
    expect((JSON.parse(reply.text) as Problem).next).toContain('data steward');
    await buildVisitLog(server.deps.database, built, [], {
      status: 'withdrawn',
      periodFrom: 0,
      periodTo: 1,
      takenAt: 1,
    });
    expect((await fit()).status).toBe(409);
    expect(await server.deps.database.read.countBy(ArrivalModelRow, { siteId: built.site.id })).toBe(0);
    expect(await server.deps.database.read.countBy(Job, { siteId: built.site.id })).toBe(0);
  });

  test('under two weeks of history is refused with its reason, at once and not tried again', async () => {
    await loadDays(13);
    const { modelId } = (await fit()).body as { modelId: string };
    const model = await ended(modelId);
    expect(model.status).toBe('failed');
    expect(model.error).toMatch(/^The model could not be fitted: .*week/);
    expect((await server.deps.database.read.findOneByOrFail(Job, { id: model.jobId! })).attempts).toBe(1);
    // Its page is there all the same, without figures.
    expect(await detailOf(modelId)).toMatchObject({ status: 'failed', error: model.error, areas: [], streams: [] });
    const reply = await approve(modelId);
    expect(reply.status).toBe(409);
    expect(reply.text).toContain('this model is failed');
  });

  test('over two weeks it is made, with a caution', async () => {
    await loadDays(15);
    const { modelId } = (await fit()).body as { modelId: string };
    expect((await ended(modelId)).status).toBe('candidate');
    expect((await detailOf(modelId)).findings.some(({ meaning }) => meaning.includes('Under eight weeks'))).toBe(true);
  });

  test.each([
    ['some are never signed out', (index: number) => index % 40 === 0],
    ['nobody ever leaves an area', (_: number, area: string) => area === 'Resuscitation'],
  ])('where %s, the page still has figures', async (_, stays) => {
    const from = today - 20 * day - 3600;
    const nameOf = new Map(built.areas.map(({ id, name }) => [id, name]));
    const visits = inventVisits(built, from, now).map((visit, index) =>
      stays(index, nameOf.get(visit.areaId)!) ? { ...visit, departureAt: null, disposition: null } : visit,
    );
    await buildVisitLog(server.deps.database, built, visits, {
      periodFrom: from,
      periodTo: today + day - 3600,
      takenAt: now,
    });
    const { modelId } = (await fit()).body as { modelId: string };
    expect(await ended(modelId)).toMatchObject({ status: 'candidate', error: null });
    const reply = await steward.get(`${models}/${modelId}`);
    expect(reply.status, reply.text).toBe(200);
    expect((reply.body as ModelDetail).streams.some(({ censored }) => censored > 0)).toBe(true);
  });

  test('where nobody ever comes to an area, the page still has figures, and says so', async () => {
    const from = today - 20 * day - 3600;
    const visits = inventVisits(built, from, now).filter(({ areaId }) => areaId === built.areas[0].id);
    const period = { periodFrom: from, periodTo: today + day - 3600, takenAt: now };
    await buildVisitLog(server.deps.database, built, visits, period);
    const { modelId } = (await fit()).body as { modelId: string };
    expect(await ended(modelId)).toMatchObject({ status: 'candidate', error: null });
    const { findings, areas } = await detailOf(modelId);
    expect(findings.map(({ meaning }) => meaning).join()).toContain('Resuscitation has no arrivals');
    expect(areas[1].ratePerHour.every((rate) => Number.isFinite(rate))).toBe(true);
  });

  test('takes declared outages out of exposure: the rates are not those of an empty department', async () => {
    const aWeek: number[] = [];
    const from = today - 18 * day - 3600;
    const outage = { from: today - 9 * day, to: today - 5 * day };
    for (const declared of [false, true]) {
      built = await buildSite(server.deps.database);
      await enterSite(built);
      const visits = inventVisits(built, from, now).filter(
        ({ arrivalAt }) => arrivalAt < outage.from || arrivalAt >= outage.to,
      );
      const period = { periodFrom: from, periodTo: today + day - 3600, takenAt: now };
      await buildVisitLog(server.deps.database, built, visits, period);
      if (declared) {
        const gap = {
          id: newId(),
          siteId: built.site.id,
          areaId: null,
          fromAt: outage.from,
          untilAt: outage.to,
          reason: 'Outage',
        };
        await server.deps.database.write((manager) => manager.insert(ExposureGapRow, gap));
      }
      const { modelId } = (await fit()).body as { modelId: string };
      await ended(modelId);
      aWeek.push((await detailOf(modelId)).areas[0].ratePerHour.reduce((sum, rate) => sum + rate, 0));
    }
    // Four of nearly nineteen days are missing.
    expect(aWeek[1] / aWeek[0]).toBeGreaterThan(1.1);
  });

  test('on chosen logs is as if there were no others, and one of another site is refused', async () => {
    const older = await loadDays(40);
    const newer = await loadDays(16);
    const asked = await steward.send('post', models, { logIds: [older.id] });
    expect(asked.status, asked.text).toBe(202);
    const { modelId } = asked.body as { modelId: string };
    expect((await ended(modelId)).status).toBe('candidate');
    // The newer log would have taken its place for the last 16 days.
    expect(await detailOf(modelId)).toMatchObject({
      lineage: [{ logId: older.id, rows: older.rows }],
      visits: older.rows,
    });
    const other = await buildSite(server.deps.database);
    const period = { periodFrom: now - day, periodTo: now, takenAt: now };
    const theirs = await buildVisitLog(server.deps.database, other, [], period);
    for (const logIds of [[theirs.id], [newer.id, 'nosuchlog']]) {
      const refused = await steward.send('post', models, { logIds });
      expect(refused.status).toBe(400);
      expect(refused.text).toContain('one may have been withdrawn');
    }
    expect((await steward.send('post', models, { logIds: [] })).status).toBe(400);
  });

  test('on a log that is withdrawn later says so, and so it does of an outage declared later within its time', async () => {
    const log = await loadDays(15);
    const { modelId } = (await fit()).body as { modelId: string };
    const unchanged = { withdrawnLogs: [], gapsDeclared: 0 };
    expect((await ended(modelId)).status).toBe('candidate');
    expect((await detailOf(modelId)).sinceFit).toEqual(unchanged);
    server.time.now += 60;
    const gaps = `/api/sites/${built.site.id}/exposure-gaps`;
    const outage = (from: number) => ({
      kind: 'outage',
      areaId: null,
      from,
      until: from + 3600,
      reason: 'Network down',
    });
    expect((await steward.send('post', gaps, outage(today - 3 * day))).status).toBe(201);
    // Outside the time that it was fitted on.
    expect((await steward.send('post', gaps, outage(today - 300 * day))).status).toBe(201);
    const withdrawal = `/api/sites/${built.site.id}/visit-logs/${log.id}/withdrawal`;
    expect((await steward.send('post', withdrawal, { reason: 'Wrong clock' })).status).toBe(200);
    const changed = { withdrawnLogs: [log.fileName], gapsDeclared: 1 };
    expect((await detailOf(modelId)).sinceFit).toEqual(changed);
    expect((await list()).models.find(({ id }) => id === modelId)?.sinceFit).toEqual(changed);
  });

  test('runs one at a time at a site, even when asked for twice at once', async () => {
    await loadDays(3);
    await server.deps.jobs.stop();
    const replies = await Promise.all([fit(), fit(operations)]);
    expect(replies.map(({ status }) => status).sort()).toEqual([202, 409]);
    expect((await fit()).text).toContain('being fitted already');
    await restartJobs();
    expect((await fit()).status).toBe(202);
    await server.workJobs();
  });

  test('that is cancelled leaves a failed model, and another can be asked for', async () => {
    await loadDays(3);
    await server.deps.jobs.stop();
    const { modelId, jobId } = (await fit()).body as { modelId: string; jobId: string };
    const reply = await steward.send('post', `/api/sites/${built.site.id}/jobs/${jobId}/cancel`);
    expect(reply.body).toMatchObject({ id: jobId, status: 'cancelled' });
    expect(await find(modelId)).toMatchObject({ status: 'failed', error: 'Cancelled.' });
    expect(await eventsOf(jobId)).toEqual(['job.cancelled']);
    await restartJobs();
    expect((await find(modelId)).status).toBe('failed');
    expect((await fit()).status).toBe(202);
    await server.workJobs();
  });

  test('that is cancelled while it runs is broken off', async () => {
    await loadDays(20);
    const { modelId, jobId } = (await fit()).body as { modelId: string; jobId: string };
    const job = () => server.deps.database.read.findOneByOrFail(Job, { id: jobId });
    await expect.poll(async () => (await job()).status, { timeout: 5000, interval: 5 }).toBe('running');
    expect((await steward.send('post', `/api/sites/${built.site.id}/jobs/${jobId}/cancel`)).status).toBe(200);
    expect(await ended(modelId)).toMatchObject({ status: 'failed', error: 'Cancelled.' });
    expect((await job()).status).toBe('cancelled');
    expect(await eventsOf(modelId)).toEqual(['arrival-model.fit-asked']);
  });

  /** Begins again to work, and waits until nothing is left to do. */
  async function restartJobs() {
    await server.restartJobs();
    await server.workJobs();
  }
});

describe('approval', () => {
  const candidate = (more: Partial<ArrivalModelRow> = {}) =>
    giveModel(server.deps.database, fitted, built, {
      status: 'candidate',
      approvedAt: null,
      approvedBy: null,
      ...more,
    });

  test('puts a candidate into use, with its reason and audit row', async () => {
    const { id } = await candidate();
    const reply = await approve(id);
    expect(reply.status).toBe(200);
    expect(reply.body).toMatchObject({
      id,
      status: 'in use',
      approvedAt: now,
      approvedBy: 'Ola',
      reason: 'Rates as the shifts know them',
    });
    expect(await eventsOf(id)).toEqual(['arrival-model.approved']);
  });

  test('retires the one in use before', async () => {
    const former = await candidate();
    await approve(former.id);
    const next = await candidate();
    server.time.now += 60;
    expect((await approve(next.id)).status).toBe(200);
    expect(await find(former.id)).toMatchObject({ status: 'retired', retiredAt: now + 60, approvedBy: 'Ola' });
    expect(await server.deps.database.read.countBy(ArrivalModelRow, { siteId: built.site.id, status: 'in use' })).toBe(
      1,
    );
    // Nothing of another site is touched.
    const other = await buildSite(server.deps.database);
    const elsewhere = await giveModel(server.deps.database, fitted, other);
    await approve((await candidate()).id);
    expect((await find(elsewhere.id)).status).toBe('in use');
  });

  test('of two at once, the one that comes later is in use, alone', async () => {
    const [a, b] = [await candidate(), await candidate()];
    const replies = await Promise.all([approve(a.id), approve(b.id)]);
    expect(replies.map(({ status }) => status)).toEqual([200, 200]);
    expect(await server.deps.database.read.countBy(ArrivalModelRow, { siteId: built.site.id, status: 'in use' })).toBe(
      1,
    );
  });

  test('is never by the person who fitted it, whatever roles they hold', async () => {
    const { database } = server.deps;
    const both = await buildPerson(database, [
      { role: 'operations', siteId: built.site.id },
      { role: 'steward', siteId: built.site.id },
    ]);
    const fitter = await server.signedInAs(both.id);
    const { id } = await candidate({ fittedByPersonId: both.id });
    const listed = (await fitter.get(models)).body as { models: ModelSummary[] };
    expect(listed.models.map(({ fittedByCaller }) => fittedByCaller)).toEqual([true]);
    const reply = await approve(id, fitter);
    expect(reply.status).toBe(403);
    expect((JSON.parse(reply.text) as Problem).detail).toContain('somebody else');
    expect((await find(id)).status).toBe('candidate');
    expect((await approve(id)).status).toBe(200);
  });

  test('needs a reason that identifies nobody', async () => {
    const { id } = await candidate();
    expect((await approve(id, operations, ' x ')).status).toBe(400);
    const reply = await approve(id, operations, 'Agreed with jo@people.example');
    expect(reply.status).toBe(400);
    expect((JSON.parse(reply.text) as Problem).faults).toEqual([
      {
        at: 'reason',
        message: 'It seems to hold an e-mail address. Say it without anything that identifies a person.',
      },
    ]);
    expect(reply.text).not.toContain('jo@');
    expect((await find(id)).status).toBe('candidate');
  });

  test.each(['fitting', 'in use', 'retired', 'failed'] as const)('of a model that is %s is refused', async (status) => {
    const { id } = await candidate({ status });
    const reply = await approve(id);
    expect(reply.status).toBe(409);
    expect(reply.text).toContain(status);
    expect((await find(id)).status).toBe(status);
  });

  test('holds although the outlook after it cannot be computed', async () => {
    vi.spyOn(server.deps.logger, 'error').mockImplementation(() => undefined);
    vi.spyOn(server.issuer, 'issue').mockRejectedValue(new Error('threads gone'));
    const { id } = await candidate();
    expect((await approve(id)).body).toMatchObject({ status: 'in use' });
  });

  test('of another site’s model is not found', async () => {
    const other = await buildSite(server.deps.database);
    const { id } = await giveModel(server.deps.database, fitted, other, { status: 'candidate' });
    expect((await approve(id)).status).toBe(404);
    expect((await retire(id)).status).toBe(404);
    expect((await steward.get(`${models}/${id}`)).status).toBe(404);
    expect((await find(id)).status).toBe('candidate');
  });
});

describe('retiring', () => {
  test('takes the model out of use: Tonight says that there is none', async () => {
    const { id } = await giveModel(server.deps.database, fitted, built);
    expect((await retire(id)).body).toMatchObject({ id, status: 'retired', retiredAt: now, reason: 'No longer right' });
    expect(await eventsOf(id)).toEqual(['arrival-model.retired']);
    const tonight = (await operations.get(`/api/sites/${built.site.id}/tonight`)).body as {
      missing: { reason: string };
    };
    expect(tonight.missing.reason).toBe('no model');
    expect((await retire(id)).status).toBe(409);
  });

  test('is for a candidate too, but not for what is being fitted or failed', async () => {
    const give = (status: ArrivalModelRow['status']) => giveModel(server.deps.database, fitted, built, { status });
    expect((await retire((await give('candidate')).id)).status).toBe(200);
    expect((await retire((await give('fitting')).id)).status).toBe(409);
    expect((await retire((await give('failed')).id)).status).toBe(409);
    expect((await retire((await give('candidate')).id, 'For Mrs Olivia Fairweather')).status).toBe(400);
  });
});
