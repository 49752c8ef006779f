import type { MigrationInterface, QueryRunner } from 'typeorm';

export class Plans1796115000003 implements MigrationInterface {
  name = 'Plans1796115000003';

  public async up(queryRunner: QueryRunner): Promise<void> {
    await queryRunner.query(
      `CREATE TABLE "scenario" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "name" text NOT NULL, "state" text NOT NULL, "changes" text NOT NULL, "savedAt" integer NOT NULL, "savedBy" text NOT NULL, "savedByPersonId" text NOT NULL, "modelId" text NOT NULL, "planVersion" integer NOT NULL, "seed" integer NOT NULL, "replications" integer NOT NULL, "engineVersion" text NOT NULL, "softwareVersion" text NOT NULL, "basisDigest" text NOT NULL, "basisIssuedAt" integer NOT NULL, "input" text NOT NULL, "jobId" text, "error" text, "confirmedAt" integer, "result" text, "resultDigest" text, "adoptedAt" integer, "adoptedBy" text, CONSTRAINT "FK_055f189b9e42c1ebaf7a83edeff" FOREIGN KEY ("siteId") REFERENCES "site" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION, CONSTRAINT "FK_b4767e74e7f0f32fd0de70a8865" FOREIGN KEY ("modelId") REFERENCES "arrival_model" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION)`,
    );
    await queryRunner.query(`CREATE INDEX "IDX_556c1d46ff8eb833569071553e" ON "scenario" ("siteId", "savedAt")`);
    await queryRunner.query(
      `CREATE TABLE "calendar_feed" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "name" text NOT NULL, "secretHash" text NOT NULL, "createdBy" text NOT NULL, "createdAt" integer NOT NULL, "lastReadAt" integer, "revokedAt" integer, CONSTRAINT "UQ_f9e3273bfcc552bcae0c60de208" UNIQUE ("secretHash"), CONSTRAINT "FK_82095df0d7b4cf4d985fe8d103f" FOREIGN KEY ("siteId") REFERENCES "site" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION)`,
    );
    await queryRunner.query(`CREATE INDEX "IDX_82095df0d7b4cf4d985fe8d103" ON "calendar_feed" ("siteId")`);
  }

  public async down(queryRunner: QueryRunner): Promise<void> {
    await queryRunner.query(`DROP TABLE "calendar_feed"`);
    await queryRunner.query(`DROP TABLE "scenario"`);
  }
}
