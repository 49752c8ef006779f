import { createHash } from 'node:crypto';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import Database from 'better-sqlite3';
import Papa from 'papaparse';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import type { AuditChain, AuditEventReply } from '../../shared/api/audit-log.ts';
import { chainStart, verifyAuditChain } from '../../server/database/audit-chain.ts';
import { makeWriteSource } from '../../server/database/data-source.ts';
import { databaseFile, openDatabase } from '../../server/database/database.ts';
import { migrations } from '../../server/database/migrations/index.ts';
import { AuditEvent } from '../../server/entities/AuditEvent.ts';
import { AuditNote } from '../../server/entities/AuditNote.ts';
import { BedChange } from '../../server/entities/BedChange.ts';
import { StaffedBedPlan } from '../../server/entities/StaffedBedPlan.ts';
import { recordAudit, recordOwnAudit, type AuditSource } from '../../server/http/audit.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

let server: TestServer;
let built: BuiltSite;
let other: BuiltSite;
let operations: SignedIn;
let administrator: SignedIn;
let source: AuditSource;

beforeAll(async () => {
  server = await openTestServer();
  built = await buildSite(server.deps.database);
  other = await buildSite(server.deps.database);
  const person = await buildPerson(server.deps.database, [{ role: 'operations', siteId: built.site.id }], 'Olu Ops');
  operations = await server.signedInAs(person.id);
  administrator = await server.signedInAs(
    (await buildPerson(server.deps.database, [{ role: 'administrator' }], 'Ada Min')).id,
  );
  source = {
    caller: { person, rolesAt: new Map(), installationRoles: [] },
    site: built.site,
    now: server.time.now,
    requestId: 'request',
    address: '192.0.2.1',
  };
});
afterAll(() => server.close());

const add = (event: string, note?: string, more: Partial<AuditSource> = {}) =>
  server.deps.database.write((manager) => recordAudit(manager, { ...source, ...more }, event, 'x', { n: 1 }, note));
const newest = async () => (await server.deps.database.read.find(AuditEvent, { order: { id: 'DESC' }, take: 1 }))[0];
const sitePath = () => `/api/sites/${built.site.id}/audit-events`;

describe('the chain', () => {
  test('holds every row with the digest of the one before, the server’s own among them', async () => {
    await add('census.entered');
    await server.deps.database.write((manager) =>
      recordOwnAudit(manager, { at: 1, actor: 'the timetable', siteId: null, event: 'backup.made', subject: 'x' }),
    );
    const rows = await server.deps.database.read.find(AuditEvent, { order: { id: 'ASC' } });
    expect(rows[0].previousHash).toBe(chainStart);
    for (const [index, row] of rows.slice(1).entries()) expect(row.previousHash).toBe(rows[index].hash);
    // Computed by hand from the form that the export states (SHA-256: FIPS 180-4, by Node's own library).
    const { id, at, personId, actor, siteId, event, subject, detail, address, requestId } = rows[0];
    const parts = [1, id, at, personId, actor, siteId, event, subject, detail, address, requestId, null, chainStart];
    expect(rows[0].hash).toBe(createHash('sha256').update(JSON.stringify(parts)).digest('hex'));
    expect(await verifyAuditChain(server.deps.database.read)).toMatchObject({ whole: true, rows: rows.length });
  });

  test('a change or a removal is refused by the database itself', async () => {
    const { write, read } = server.deps.database;
    const { id } = await newest();
    await expect(write((manager) => manager.update(AuditEvent, { id }, { actor: 'x' }))).rejects.toThrow(
      /never changed/,
    );
    await expect(write((manager) => manager.delete(AuditEvent, { id }))).rejects.toThrow(/never deleted/);
    const forged = { at: 1, actor: 'x', event: 'x', subject: 'x', detail: '{}', previousHash: chainStart, hash: 'x' };
    await expect(write((manager) => manager.insert(AuditEvent, forged))).rejects.toThrow(/follows the newest/);
    expect((await verifyAuditChain(read)).whole).toBe(true);
  });

  describe('a file that was changed past the server', () => {
    /** Opens a filled database of its own, changes it with the triggers off, and says what the check finds. */
    async function checkAfter(change: (db: Database.Database) => void) {
      const folder = mkdtempSync(join(tmpdir(), 'shoalmark-chain-'));
      const database = await openDatabase(folder);
      try {
        for (let i = 0; i < 900; i += 1) {
          await database.write((manager) =>
            recordAudit(
              manager,
              { ...source, site: null },
              'census.entered',
              String(i),
              {},
              i % 3 === 0 ? 'Note' : null,
            ),
          );
        }
        const db = new Database(databaseFile(folder));
        for (const { name } of db
          .prepare<[], { name: string }>("SELECT name FROM sqlite_master WHERE type = 'trigger'")
          .all()) {
          db.exec(`DROP TRIGGER "${name}"`);
        }
        change(db);
        db.close();
        return await verifyAuditChain(database.read);
      } finally {
        await database.close();
        rmSync(folder, { recursive: true });
      }
    }

    test.each<[string, string, { eventId: number; kind: string } | null]>([
      ['nothing', 'DELETE FROM audit_event WHERE id < 0', null],
      [
        'an actor',
        "UPDATE audit_event SET actor = 'Somebody else' WHERE id = 500",
        { eventId: 500, kind: 'row altered' },
      ],
      ['a time', 'UPDATE audit_event SET at = at + 1 WHERE id = 1', { eventId: 1, kind: 'row altered' }],
      ['a row taken out', 'DELETE FROM audit_event WHERE id = 450', { eventId: 451, kind: 'row missing before' }],
      ['the first row taken out', 'DELETE FROM audit_event WHERE id = 1', { eventId: 2, kind: 'row missing before' }],
      [
        'rows cut off at the end',
        'DELETE FROM audit_event WHERE id > 890',
        { eventId: 900, kind: 'rows missing at the end' },
      ],
      ['a note', "UPDATE audit_note SET text = 'Other' WHERE eventId = 1", { eventId: 1, kind: 'note altered' }],
      [
        'a note taken out without a trace',
        'DELETE FROM audit_note WHERE eventId = 4',
        { eventId: 4, kind: 'note missing' },
      ],
      [
        'two rows swapped',
        'UPDATE audit_event SET id = -1 WHERE id = 7; UPDATE audit_event SET id = 7 WHERE id = 8; UPDATE audit_event SET id = 8 WHERE id = -1',
        { eventId: 7, kind: 'row missing before' },
      ],
    ])('%s', async (_, sql, fault) => {
      const check = await checkAfter((db) => db.exec(sql));
      expect(check.fault).toEqual(fault);
      expect(check.whole).toBe(fault === null);
    });
  });

  test('rows from before the chain are chained by the migration, in order', async () => {
    const folder = mkdtempSync(join(tmpdir(), 'shoalmark-old-'));
    const old = await makeWriteSource(databaseFile(folder)).initialize();
    await old.runMigrations();
    for (let left = migrations.length; left > 0; left -= 1) {
      if (
        (await old.query<{ name: string }[]>('SELECT name FROM migrations ORDER BY id DESC LIMIT 1'))[0].name ===
        'Administration1796115000006'
      ) {
        await old.undoLastMigration();
        break;
      }
      await old.undoLastMigration();
    }
    await old.query(
      `INSERT INTO audit_event (at, actor, event, subject, detail)
       SELECT value, 'Person ' || value, 'census.entered', 'x', '{}' FROM json_each(?)`,
      [JSON.stringify(Array.from({ length: 2345 }, (_, i) => i + 1))],
    );
    await old.destroy();
    const database = await openDatabase(folder);
    try {
      expect(await verifyAuditChain(database.read)).toMatchObject({ whole: true, rows: 2345 });
      await database.write((manager) => recordAudit(manager, { ...source, site: null }, 'census.entered', 'x'));
      expect(await verifyAuditChain(database.read)).toMatchObject({ whole: true, rows: 2346 });
    } finally {
      await database.close();
      rmSync(folder, { recursive: true });
    }
  });
});

describe('the trail', () => {
  test('is the site’s own for operations, everything without notes for the administrator', async () => {
    await add('staffed-beds.changed-now', 'Two nurses off sick');
    await add('census.entered', undefined, { site: other.site });
    await add('role.given', undefined, { site: null });
    const own = (await operations.get(sitePath())).body as { events: AuditEventReply[] };
    expect(new Set(own.events.map(({ siteId }) => siteId))).toEqual(new Set([built.site.id]));
    expect(own.events[0]).toMatchObject({ event: 'staffed-beds.changed-now', note: { text: 'Two nurses off sick' } });
    const all = (await administrator.get('/api/audit-events')).body as { events: AuditEventReply[] };
    expect(all.events.map(({ siteId }) => siteId).slice(0, 3)).toEqual([null, other.site.id, built.site.id]);
    expect(all.events[2].note).toEqual({ state: 'kept', text: null });
    expect(JSON.stringify(all)).not.toContain('off sick');
  });

  test('is filtered by topic, name, time and site, and paged without a gap', async () => {
    for (let i = 0; i < 120; i += 1)
      await add(i % 2 === 0 ? 'brief.sent' : 'brief-x.sent', undefined, { now: 1_000_000 + i });
    const seen: number[] = [];
    let before: number | null = null;
    do {
      const reply = await operations.get(
        `${sitePath()}?event=brief${before === null ? '' : `&before=${String(before)}`}`,
      );
      const body = reply.body as { events: AuditEventReply[]; before: number | null };
      seen.push(...body.events.map(({ at }) => at));
      before = body.before;
    } while (before !== null);
    expect(seen).toEqual(Array.from({ length: 60 }, (_, i) => 1_000_118 - 2 * i));
    const between = await operations.get(`${sitePath()}?event=brief&from=1000010&until=1000014`);
    expect((between.body as { events: AuditEventReply[] }).events.map(({ at }) => at)).toEqual([1_000_012, 1_000_010]);
    const by = async (actor: string) =>
      ((await administrator.get(`/api/audit-events?actor=${encodeURIComponent(actor)}`)).body as { events: unknown[] })
        .events.length;
    expect(await by('olu o')).toBe(50);
    expect(await by('%')).toBe(0);
    expect((await administrator.get('/api/audit-events?event=Drop%20table')).status).toBe(400);
  });

  test('is exported as CSV whose digests can be computed again from what stands in it', async () => {
    await add('scenario.saved', '=1+2, "quoted"');
    const reply = await operations.get(`${sitePath()}/export?event=scenario`);
    expect(reply.headers['content-type']).toContain('text/csv');
    const lines = reply.text.split('\r\n');
    expect(lines[1]).toMatch(/^# Chain whole: \d+ rows checked, newest digest [0-9a-f]{64}$/);
    const { data } = Papa.parse<Record<string, string>>(lines.slice(3).join('\r\n'), {
      header: true,
      skipEmptyLines: true,
    });
    expect(data).toHaveLength(1);
    const row = data[0];
    expect(row.note).toBe(`'=1+2, "quoted"`);
    const or = (text: string) => (text === '' ? null : text);
    const parts = [
      ...[
        1,
        Number(row.number),
        Date.parse(row['time (UTC)']) / 1000,
        or(row.person),
        row.who,
        or(row.site),
        row.event,
      ],
      ...[row.record, row.detail, or(row.address), or(row['request id']), or(row['digest of the note'])],
      row['digest before'],
    ];
    expect(createHash('sha256').update(JSON.stringify(parts)).digest('hex')).toBe(row.digest);
    const all = await administrator.get('/api/audit-events/export');
    expect(all.text.split('\r\n').length).toBeGreaterThan(120);
    expect(all.text).not.toContain('quoted');
  });

  test('says whether the chain is whole, to both', async () => {
    server.time.now += 120;
    for (const reply of [
      await administrator.get('/api/audit-chain'),
      await operations.get(`/api/sites/${built.site.id}/audit-chain`),
    ]) {
      expect(reply.body as AuditChain).toMatchObject({ whole: true, fault: null, checkedAt: server.time.now });
    }
  });
});

describe('a note that should not have been typed', () => {
  test('is taken out of the trail and of its record; event, digest and a trace stay', async () => {
    const { database } = server.deps;
    const change = {
      ...{ id: 'change', siteId: built.site.id, areaId: built.areas[0].id, kind: 'change now' as const, fromAt: 1 },
      ...{ untilAt: 2, beds: 3, blocked: 0, reason: 'About Mr Example', madeBy: 'x', madeAt: 1 },
    };
    await database.write(async (manager) => {
      await manager.insert(BedChange, change);
      await recordAudit(manager, source, 'staffed-beds.changed-now', change.id, {}, change.reason);
    });
    const { id } = await newest();
    const path = `${sitePath()}/${String(id)}/redaction`;
    expect((await operations.send('post', path, { reason: 'About Mr Smith' })).status).toBe(400);
    expect((await operations.send('post', path, { reason: 'It named a patient' })).status).toBe(204);
    expect(await database.read.findOneByOrFail(AuditNote, { eventId: id })).toMatchObject({
      salt: null,
      text: null,
      redactedAt: server.time.now,
      redactedBy: 'Olu Ops',
    });
    expect((await database.read.findOneByOrFail(BedChange, { id: change.id })).reason).toBe('Text taken out');
    expect(await newest()).toMatchObject({ event: 'audit-note.taken-out', subject: String(id), siteId: built.site.id });
    expect(await verifyAuditChain(database.read)).toMatchObject({ whole: true });
    expect((await operations.send('post', path, { reason: 'It named a patient' })).status).toBe(409);
  });

  test('that one press left at several places is taken out of each; the same words of another time stay', async () => {
    const { database } = server.deps;
    const { site, areas } = built;
    const reason = 'Beds for Mr Example';
    const change = (id: string, madeAt: number) => ({
      ...{ id, siteId: site.id, areaId: areas[0].id, kind: 'dated exception' as const, fromAt: 1, untilAt: 2 },
      ...{ beds: 3, blocked: 0, reason, madeBy: 'x', madeAt },
    });
    const context = { ...source, requestId: 'adoption' };
    await database.write(async (manager) => {
      await manager.insert(BedChange, [
        change('adopted 1', source.now),
        change('adopted 2', source.now),
        change('earlier', 1),
      ]);
      const plan = { id: 'adopted plan', siteId: site.id, version: 1, savedAt: source.now, savedBy: 'x', reason };
      await manager.insert(StaffedBedPlan, plan);
      await recordAudit(manager, context, 'staffed-beds.plan-saved', plan.id, {}, reason);
      await recordAudit(manager, context, 'scenario.adopted', 'scenario', {}, reason);
    });
    const { id } = await newest();
    const path = `${sitePath()}/${String(id)}/redaction`;
    expect((await operations.send('post', path, { reason: 'It named a patient' })).status).toBe(204);
    expect(await database.read.countBy(AuditNote, { text: reason })).toBe(0);
    const changes = await database.read.find(BedChange, { where: { kind: 'dated exception' }, order: { id: 'ASC' } });
    expect(changes.map((each) => [each.id, each.reason])).toEqual([
      ['adopted 1', 'Text taken out'],
      ['adopted 2', 'Text taken out'],
      ['earlier', reason],
    ]);
    expect((await database.read.findOneByOrFail(StaffedBedPlan, { id: 'adopted plan' })).reason).toBe('Text taken out');
    expect(await verifyAuditChain(database.read)).toMatchObject({ whole: true });
  });

  test('of an exception of the plan is taken out of it', async () => {
    const { database } = server.deps;
    const change = {
      ...{ id: 'exception', siteId: built.site.id, areaId: built.areas[0].id, kind: 'dated exception' as const },
      ...{ fromAt: 1, untilAt: 2, beds: 3, blocked: 0, reason: 'About Ms Example', madeBy: 'x', madeAt: 2 },
    };
    await database.write(async (manager) => {
      await manager.insert(BedChange, change);
      await recordAudit(manager, source, 'staffed-beds.exception-added', change.id, {}, change.reason);
    });
    const path = `${sitePath()}/${String((await newest()).id)}/redaction`;
    expect((await operations.send('post', path, { reason: 'It named a patient' })).status).toBe(204);
    expect((await database.read.findOneByOrFail(BedChange, { id: change.id })).reason).toBe('Text taken out');
  });

  test('of another site is not found; an event without a note has none to take out', async () => {
    await add('census.entered', 'Note', { site: other.site });
    const { id } = await newest();
    const take = (client: SignedIn, path: string) => client.send('post', path, { reason: 'Not to be kept' });
    expect((await take(operations, `${sitePath()}/${String(id)}/redaction`)).status).toBe(404);
    expect((await take(administrator, `/api/audit-events/${String(id)}/redaction`)).status).toBe(204);
    const traceOf = await newest();
    expect(traceOf).toMatchObject({ siteId: other.site.id, actor: 'Ada Min' });
    await add('census.entered');
    expect((await take(administrator, `/api/audit-events/${String((await newest()).id)}/redaction`)).status).toBe(409);
  });
});
