import type { MigrationInterface, QueryRunner } from 'typeorm';

export class Briefs1796115000004 implements MigrationInterface {
  name = 'Briefs1796115000004';

  public async up(queryRunner: QueryRunner): Promise<void> {
    await queryRunner.query(
      `CREATE TABLE "brief_settings" ("siteId" text PRIMARY KEY NOT NULL, "scheduled" boolean NOT NULL, "weekday" integer NOT NULL, "minuteOfDay" integer NOT NULL, "approveFirst" boolean NOT NULL, "covers" text NOT NULL, "lastDueAt" integer NOT NULL, CONSTRAINT "FK_8712fa116a248b481bdc0fa5c3a" FOREIGN KEY ("siteId") REFERENCES "site" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION)`,
    );
    await queryRunner.query(
      `CREATE TABLE "brief_recipient" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "personId" text, "name" text NOT NULL, "address" text NOT NULL, "addedBy" text NOT NULL, "addedAt" integer NOT NULL, "askedAt" integer, "confirmedAt" integer, "unsubscribedAt" integer, "removedAt" integer, CONSTRAINT "FK_7443785b6f79c86f9b2db1a520d" FOREIGN KEY ("siteId") REFERENCES "site" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION, CONSTRAINT "FK_529a3adb119fc7943d497a4f4fc" FOREIGN KEY ("personId") REFERENCES "person" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION)`,
    );
    await queryRunner.query(
      `CREATE UNIQUE INDEX "IDX_ff3c00d6304713ef551daf705a" ON "brief_recipient" ("siteId", "address")`,
    );
    await queryRunner.query(
      `CREATE TABLE "brief" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "siteIds" text NOT NULL, "state" text NOT NULL, "scheduledFor" integer, "composedAt" integer NOT NULL, "composedBy" text NOT NULL, "approvedBy" text, "approvedAt" integer, "sentAt" integer, "subject" text NOT NULL, "html" text NOT NULL, "text" text NOT NULL, "attachments" text NOT NULL, CONSTRAINT "FK_874a5f9375fc3af21d28d80fc54" FOREIGN KEY ("siteId") REFERENCES "site" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION)`,
    );
    await queryRunner.query(`CREATE INDEX "IDX_e7bfaf360ac6a04114932593ad" ON "brief" ("siteId", "composedAt")`);
    await queryRunner.query(
      `CREATE UNIQUE INDEX "IDX_592772052b330dffc024464a3a" ON "brief" ("siteId", "scheduledFor")`,
    );
    await queryRunner.query(
      `CREATE TABLE "brief_delivery" ("id" text PRIMARY KEY NOT NULL, "briefId" text NOT NULL, "recipientId" text, "position" integer NOT NULL, "name" text NOT NULL, "address" text NOT NULL, "messageId" text NOT NULL, "state" text NOT NULL, "attempts" integer NOT NULL, "attemptedAt" integer, "sentAt" integer, "lastAnswer" text, CONSTRAINT "UQ_1da09f036abf95bc926162b61a0" UNIQUE ("messageId"), CONSTRAINT "FK_ac4cb3a90e941ce3ca908e3bf1a" FOREIGN KEY ("briefId") REFERENCES "brief" ("id") ON DELETE CASCADE ON UPDATE NO ACTION, CONSTRAINT "FK_0363c330deef36cd33f8ccb13ad" FOREIGN KEY ("recipientId") REFERENCES "brief_recipient" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION)`,
    );
    await queryRunner.query(
      `CREATE INDEX "IDX_12259135bfee51676b29304e62" ON "brief_delivery" ("briefId", "position")`,
    );
  }

  public async down(queryRunner: QueryRunner): Promise<void> {
    await queryRunner.query(`DROP TABLE "brief_delivery"`);
    await queryRunner.query(`DROP TABLE "brief"`);
    await queryRunner.query(`DROP TABLE "brief_recipient"`);
    await queryRunner.query(`DROP TABLE "brief_settings"`);
  }
}
