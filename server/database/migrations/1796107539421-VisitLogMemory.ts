import type { MigrationInterface, QueryRunner } from 'typeorm';

/** Columns are added in place: a table that visits refer to is never dropped and filled again. */
export class VisitLogMemory1796107539421 implements MigrationInterface {
  name = 'VisitLogMemory1796107539421';

  public async up(queryRunner: QueryRunner): Promise<void> {
    await queryRunner.query(
      `CREATE TABLE "visit_log_mapping" ("siteId" text PRIMARY KEY NOT NULL, "mapping" text NOT NULL, "savedBy" text NOT NULL, "savedAt" integer NOT NULL, CONSTRAINT "FK_dc460a3121b8d0beedf169fbe58" FOREIGN KEY ("siteId") REFERENCES "site" ("id") ON DELETE RESTRICT ON UPDATE NO ACTION)`,
    );
    await queryRunner.query(`ALTER TABLE "exposure_gap" ADD COLUMN "kind" text NOT NULL DEFAULT ('outage')`);
    await queryRunner.query(`ALTER TABLE "exposure_gap" ADD COLUMN "declaredBy" text`);
    await queryRunner.query(`ALTER TABLE "exposure_gap" ADD COLUMN "declaredAt" integer`);
    await queryRunner.query(`ALTER TABLE "visit_log" ADD COLUMN "arrivalMeaning" text`);
    await queryRunner.query(`ALTER TABLE "visit_log" ADD COLUMN "areaMeaning" text`);
  }

  public async down(queryRunner: QueryRunner): Promise<void> {
    await queryRunner.query(`ALTER TABLE "visit_log" DROP COLUMN "areaMeaning"`);
    await queryRunner.query(`ALTER TABLE "visit_log" DROP COLUMN "arrivalMeaning"`);
    await queryRunner.query(`ALTER TABLE "exposure_gap" DROP COLUMN "declaredAt"`);
    await queryRunner.query(`ALTER TABLE "exposure_gap" DROP COLUMN "declaredBy"`);
    await queryRunner.query(`ALTER TABLE "exposure_gap" DROP COLUMN "kind"`);
    await queryRunner.query(`DROP TABLE "visit_log_mapping"`);
  }
}
