import type { MigrationInterface, QueryRunner } from 'typeorm';
import { chainStart, hashAuditRow, type ChainedRow } from '../audit-chain.ts';

const batch = 1000;

/** Chains the audit trail, the rows that stand there included; roles by the provider's groups; sessions by person. */
export class Administration1796115000006 implements MigrationInterface {
  name = 'Administration1796115000006';

  public async up(queryRunner: QueryRunner): Promise<void> {
    await queryRunner.query(`ALTER TABLE "audit_event" ADD COLUMN "noteHash" text`);
    await queryRunner.query(`ALTER TABLE "audit_event" ADD COLUMN "previousHash" text NOT NULL DEFAULT ('')`);
    await queryRunner.query(`ALTER TABLE "audit_event" ADD COLUMN "hash" text NOT NULL DEFAULT ('')`);
    await this.chainRows(queryRunner);
    await queryRunner.query(
      `CREATE TABLE "audit_note" ("eventId" integer PRIMARY KEY NOT NULL, "salt" text, "text" text, "redactedAt" integer, "redactedBy" text)`,
    );
    await queryRunner.query(
      `CREATE TRIGGER "audit_event_no_update" BEFORE UPDATE ON "audit_event" BEGIN SELECT RAISE(ABORT, 'audit rows are never changed'); END`,
    );
    await queryRunner.query(
      `CREATE TRIGGER "audit_event_no_delete" BEFORE DELETE ON "audit_event" BEGIN SELECT RAISE(ABORT, 'audit rows are never deleted'); END`,
    );
    await queryRunner.query(
      `CREATE TRIGGER "audit_event_follows" BEFORE INSERT ON "audit_event" WHEN NEW."previousHash" <> coalesce((SELECT "hash" FROM "audit_event" ORDER BY "id" DESC LIMIT 1), '${chainStart}') BEGIN SELECT RAISE(ABORT, 'an audit row follows the newest one'); END`,
    );
    await queryRunner.query(
      `CREATE TRIGGER "audit_note_no_delete" BEFORE DELETE ON "audit_note" BEGIN SELECT RAISE(ABORT, 'audit notes are taken out with a trace'); END`,
    );
    // Taking a note's text out is the only change.
    await queryRunner.query(
      `CREATE TRIGGER "audit_note_redact_only" BEFORE UPDATE ON "audit_note" WHEN NEW."text" IS NOT NULL OR NEW."redactedAt" IS NULL OR OLD."redactedAt" IS NOT NULL BEGIN SELECT RAISE(ABORT, 'audit notes are only ever taken out'); END`,
    );

    await queryRunner.query(`ALTER TABLE "person" ADD COLUMN "emailVerified" integer NOT NULL DEFAULT (0)`);
    await queryRunner.query(`ALTER TABLE "person" ADD COLUMN "identityGroups" text NOT NULL DEFAULT ('[]')`);
    await queryRunner.query(
      `CREATE TABLE "group_role" ("id" text PRIMARY KEY NOT NULL, "claim" text NOT NULL, "role" text NOT NULL, "siteId" text, "groupId" text, "createdBy" text NOT NULL, "createdAt" integer NOT NULL, CONSTRAINT "FK_62806054db51a138ee29ec0360b" FOREIGN KEY ("siteId") REFERENCES "site" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION, CONSTRAINT "FK_5f5e3b95cbdf0582623d98adf10" FOREIGN KEY ("groupId") REFERENCES "health_group" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION)`,
    );
    await queryRunner.query(`CREATE INDEX "IDX_3bc6dfde3124c026f0bb925b45" ON "group_role" ("claim")`);
    await queryRunner.query(`ALTER TABLE "session" ADD COLUMN "personId" text`);
    await queryRunner.query(`CREATE INDEX "IDX_b8e1fcf37e349295272a5ebbd5" ON "session" ("personId")`);
    // Sessions from before do not say whose they are and could not be ended with the person's others.
    await queryRunner.query(`DELETE FROM "session"`);
  }

  public async down(queryRunner: QueryRunner): Promise<void> {
    await queryRunner.query(`DROP INDEX "IDX_b8e1fcf37e349295272a5ebbd5"`);
    await queryRunner.query(`ALTER TABLE "session" DROP COLUMN "personId"`);
    await queryRunner.query(`DROP TABLE "group_role"`);
    await queryRunner.query(`ALTER TABLE "person" DROP COLUMN "identityGroups"`);
    await queryRunner.query(`ALTER TABLE "person" DROP COLUMN "emailVerified"`);
    await queryRunner.query(`DROP TABLE "audit_note"`);
    for (const name of ['audit_event_no_update', 'audit_event_no_delete', 'audit_event_follows']) {
      await queryRunner.query(`DROP TRIGGER "${name}"`);
    }
    for (const name of ['hash', 'previousHash', 'noteHash']) {
      await queryRunner.query(`ALTER TABLE "audit_event" DROP COLUMN "${name}"`);
    }
  }

  private async chainRows(queryRunner: QueryRunner): Promise<void> {
    let previousHash = chainStart;
    let last = 0;
    for (;;) {
      const rows = (await queryRunner.query(
        `SELECT * FROM "audit_event" WHERE "id" > ${String(last)} ORDER BY "id" LIMIT ${String(batch)}`,
      )) as ChainedRow[];
      const chained: [number, string, string][] = [];
      for (const row of rows) {
        const hash = hashAuditRow({ ...row, noteHash: null, previousHash });
        chained.push([row.id, previousHash, hash]);
        previousHash = hash;
        last = row.id;
      }
      await queryRunner.query(
        `UPDATE "audit_event" SET "previousHash" = chained.value ->> 1, "hash" = chained.value ->> 2
           FROM json_each(?) chained WHERE "audit_event"."id" = chained.value ->> 0`,
        [JSON.stringify(chained)],
      );
      if (rows.length < batch) return;
    }
  }
}
