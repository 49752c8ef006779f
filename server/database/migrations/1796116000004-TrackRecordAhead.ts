import type { MigrationInterface, QueryRunner } from 'typeorm';

export class TrackRecordAhead1796116000004 implements MigrationInterface {
  name = 'TrackRecordAhead1796116000004';

  public async up(queryRunner: QueryRunner): Promise<void> {
    await queryRunner.query(
      `CREATE TABLE "model_comparison" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "candidateId" text NOT NULL, "inUseId" text NOT NULL, "status" text NOT NULL, "createdAt" integer NOT NULL, "askedBy" text NOT NULL, "jobId" text NOT NULL, "doneAt" integer, "error" text, "seed" integer NOT NULL, "engineVersion" text NOT NULL, "result" text, CONSTRAINT "FK_503b6f7899a2ed87fa749ef35c4" FOREIGN KEY ("candidateId") REFERENCES "arrival_model" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION, CONSTRAINT "FK_8fb14842244bc7e5af38ad532fe" FOREIGN KEY ("inUseId") REFERENCES "arrival_model" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION)`,
    );
    await queryRunner.query(
      `CREATE INDEX "IDX_fa27fedccdbcc1ed8bfdee503c" ON "model_comparison" ("candidateId", "createdAt") `,
    );
    await queryRunner.query(
      `CREATE TABLE "week_outlook_laws" ("weekOutlookId" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "issuedAt" integer NOT NULL, "laws" text NOT NULL, "state" text NOT NULL DEFAULT ('waiting'), CONSTRAINT "FK_89aca8661f50b2417c5872e3a48" FOREIGN KEY ("weekOutlookId") REFERENCES "week_outlook" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION)`,
    );
    await queryRunner.query(
      `CREATE INDEX "IDX_5b982c1df1e7693a3395a28591" ON "week_outlook_laws" ("siteId", "state", "issuedAt") `,
    );
    await queryRunner.query(
      `CREATE INDEX "IDX_b53a24083165a549f0198f625f" ON "week_outlook_laws" ("siteId", "issuedAt") `,
    );
  }

  public async down(queryRunner: QueryRunner): Promise<void> {
    await queryRunner.query(`DROP INDEX "IDX_b53a24083165a549f0198f625f"`);
    await queryRunner.query(`DROP INDEX "IDX_5b982c1df1e7693a3395a28591"`);
    await queryRunner.query(`DROP TABLE "week_outlook_laws"`);
    await queryRunner.query(`DROP INDEX "IDX_fa27fedccdbcc1ed8bfdee503c"`);
    await queryRunner.query(`DROP TABLE "model_comparison"`);
  }
}
