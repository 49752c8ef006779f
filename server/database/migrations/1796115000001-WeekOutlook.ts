import type { MigrationInterface, QueryRunner } from 'typeorm';

export class WeekOutlook1796115000001 implements MigrationInterface {
  name = 'WeekOutlook1796115000001';

  public async up(queryRunner: QueryRunner): Promise<void> {
    await queryRunner.query(
      `CREATE TABLE "week_outlook" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "issuedAt" integer NOT NULL, "trigger" text NOT NULL, "modelId" text NOT NULL, "planVersion" integer NOT NULL, "seed" integer NOT NULL, "replications" integer NOT NULL, "engineVersion" text NOT NULL, "softwareVersion" text NOT NULL, "computeMilliseconds" real NOT NULL, "standsOn" text NOT NULL, "calendar" text NOT NULL, "input" text NOT NULL, "result" text NOT NULL, "digest" text NOT NULL, CONSTRAINT "FK_9bef6f47c0e07ea1c0a5d4d6167" FOREIGN KEY ("siteId") REFERENCES "site" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION, CONSTRAINT "FK_ecc2b5abb413a1d58db8819295f" FOREIGN KEY ("modelId") REFERENCES "arrival_model" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION)`,
    );
    await queryRunner.query(`CREATE INDEX "IDX_9bc2f0b7e1ced6a2404c16eefb" ON "week_outlook" ("siteId", "issuedAt")`);
  }

  public async down(queryRunner: QueryRunner): Promise<void> {
    await queryRunner.query(`DROP TABLE "week_outlook"`);
  }
}
