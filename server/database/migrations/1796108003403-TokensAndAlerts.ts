import type { MigrationInterface, QueryRunner } from 'typeorm';

/** The column is added in place: a table that everything refers to is never dropped and filled again. */
export class TokensAndAlerts1796108003403 implements MigrationInterface {
  name = 'TokensAndAlerts1796108003403';

  public async up(queryRunner: QueryRunner): Promise<void> {
    await queryRunner.query(`ALTER TABLE "site" ADD COLUMN "onCallAddress" text`);
    await queryRunner.query(
      `CREATE TABLE "alert_sent" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "areaId" text NOT NULL, "outlookId" text NOT NULL, "sentAt" integer NOT NULL, "shiftFrom" integer, "chance" real NOT NULL, "alertLimit" real NOT NULL, "rearmedAt" integer, "jobId" text NOT NULL, CONSTRAINT "FK_7735fbd5a3efbc48936f5f17764" FOREIGN KEY ("siteId") REFERENCES "site" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION, CONSTRAINT "FK_6e28c5858e9ac24ede04f3713d6" FOREIGN KEY ("areaId") REFERENCES "care_area" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION, CONSTRAINT "FK_75aa94949b5985cc3e89ebdf8a5" FOREIGN KEY ("outlookId") REFERENCES "outlook" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION)`,
    );
    await queryRunner.query(
      `CREATE INDEX "IDX_d9481b1ef368d9f39a822a7754" ON "alert_sent" ("siteId", "areaId", "sentAt")`,
    );
    await queryRunner.query(
      `CREATE TABLE "machine_token" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "purpose" text NOT NULL, "name" text NOT NULL, "secretHash" text NOT NULL, "createdBy" text NOT NULL, "createdAt" integer NOT NULL, "lastUsedAt" integer, "revokedAt" integer, CONSTRAINT "UQ_35e57be0a370b324f68be1c6c58" UNIQUE ("secretHash"), CONSTRAINT "FK_6aa5af254b5f3e808d6f86d548e" FOREIGN KEY ("siteId") REFERENCES "site" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION)`,
    );
    await queryRunner.query(`CREATE INDEX "IDX_6aa5af254b5f3e808d6f86d548" ON "machine_token" ("siteId")`);
  }

  public async down(queryRunner: QueryRunner): Promise<void> {
    await queryRunner.query(`DROP TABLE "machine_token"`);
    await queryRunner.query(`DROP TABLE "alert_sent"`);
    await queryRunner.query(`ALTER TABLE "site" DROP COLUMN "onCallAddress"`);
  }
}
