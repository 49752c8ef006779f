import type { MigrationInterface, QueryRunner } from 'typeorm';

export class TrackRecord1796115000005 implements MigrationInterface {
  name = 'TrackRecord1796115000005';

  public async up(queryRunner: QueryRunner): Promise<void> {
    await queryRunner.query(
      `CREATE TABLE "outlook_laws" ("outlookId" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "issuedAt" integer NOT NULL, "laws" text NOT NULL, "state" text NOT NULL DEFAULT ('waiting'), CONSTRAINT "FK_6013b597fc697313e43aa1dd6c7" FOREIGN KEY ("outlookId") REFERENCES "outlook" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION)`,
    );
    await queryRunner.query(`CREATE INDEX "IDX_9bcf085e6e8b968199d4528169" ON "outlook_laws" ("siteId", "issuedAt") `);
    await queryRunner.query(
      `CREATE INDEX "IDX_b45a11d45e93e465af900db7e4" ON "outlook_laws" ("siteId", "state", "issuedAt") `,
    );
    await queryRunner.query(
      `CREATE TABLE "forecast_score" ("id" integer PRIMARY KEY AUTOINCREMENT NOT NULL, "siteId" text NOT NULL, "outlookId" text, "weekOutlookId" text, "modelId" text NOT NULL, "areaId" text NOT NULL, "measure" text NOT NULL, "leadHours" integer NOT NULL, "shift" text NOT NULL, "fromAt" integer NOT NULL, "toAt" integer NOT NULL, "week" integer NOT NULL, "acknowledged" integer NOT NULL, "recomputed" integer NOT NULL, "observed" integer NOT NULL, "logScore" real, "absoluteError" real, "naiveError" real, "pinball" text, "intervals" text, "median" real, "pitLower" real, "pitUpper" real, "pit" real, "floorPinball" real, "floorError" real, "baselines" text, "chance" real, "short" integer, CONSTRAINT "FK_46be54875e0051375b0faa4e8f6" FOREIGN KEY ("outlookId") REFERENCES "outlook" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION, CONSTRAINT "FK_ab4cf2e4f63f00a24dd738bde52" FOREIGN KEY ("weekOutlookId") REFERENCES "week_outlook" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION)`,
    );
    await queryRunner.query(`CREATE INDEX "IDX_46be54875e0051375b0faa4e8f" ON "forecast_score" ("outlookId") `);
    await queryRunner.query(`CREATE INDEX "IDX_ab4cf2e4f63f00a24dd738bde5" ON "forecast_score" ("weekOutlookId") `);
    await queryRunner.query(
      `CREATE INDEX "IDX_897db6e4c5b5937e6504e5dc11" ON "forecast_score" ("siteId", "measure", "leadHours", "areaId", "fromAt") `,
    );
    await queryRunner.query(`CREATE INDEX "IDX_01e78e03725afcb4654ff6e616" ON "forecast_score" ("siteId", "week") `);
    await queryRunner.query(
      `CREATE TABLE "score_week" ("siteId" text NOT NULL, "week" integer NOT NULL, "measure" text NOT NULL, "leadHours" integer NOT NULL, "areaId" text NOT NULL, "shift" text NOT NULL, "modelId" text NOT NULL, "acknowledged" integer NOT NULL, "sums" text NOT NULL, PRIMARY KEY ("siteId", "week", "measure", "leadHours", "areaId", "shift", "modelId", "acknowledged")) WITHOUT ROWID`,
    );
    await queryRunner.query(`ALTER TABLE "arrival_model" ADD COLUMN "driftFoundAt" integer`);
    await queryRunner.query(`ALTER TABLE "arrival_model" ADD COLUMN "drift" text`);
  }

  public async down(queryRunner: QueryRunner): Promise<void> {
    await queryRunner.query(`ALTER TABLE "arrival_model" DROP COLUMN "drift"`);
    await queryRunner.query(`ALTER TABLE "arrival_model" DROP COLUMN "driftFoundAt"`);
    await queryRunner.query(`DROP TABLE "score_week"`);
    await queryRunner.query(`DROP INDEX "IDX_01e78e03725afcb4654ff6e616"`);
    await queryRunner.query(`DROP INDEX "IDX_897db6e4c5b5937e6504e5dc11"`);
    await queryRunner.query(`DROP INDEX "IDX_ab4cf2e4f63f00a24dd738bde5"`);
    await queryRunner.query(`DROP INDEX "IDX_46be54875e0051375b0faa4e8f"`);
    await queryRunner.query(`DROP TABLE "forecast_score"`);
    await queryRunner.query(`DROP INDEX "IDX_b45a11d45e93e465af900db7e4"`);
    await queryRunner.query(`DROP INDEX "IDX_9bcf085e6e8b968199d4528169"`);
    await queryRunner.query(`DROP TABLE "outlook_laws"`);
  }
}
