import type { MigrationInterface, QueryRunner } from 'typeorm';

/** Logs of hourly counts, what they state of stays, and where a model's stays come from. */
export class HourlyCounts1796116000001 implements MigrationInterface {
  name = 'HourlyCounts1796116000001';

  public async up(queryRunner: QueryRunner): Promise<void> {
    await queryRunner.query(`ALTER TABLE "visit_log" ADD COLUMN "kind" text NOT NULL DEFAULT ('visits')`);
    await queryRunner.query(`ALTER TABLE "visit_log" ADD COLUMN "statedStays" text`);
    await queryRunner.query(`ALTER TABLE "arrival_model" ADD COLUMN "staysFrom" text`);
    await queryRunner.query(
      `CREATE TABLE "hourly_count" ("logNumber" integer NOT NULL, "rowNumber" integer NOT NULL, "areaCode" integer NOT NULL, "localHour" integer NOT NULL, "arrivals" integer NOT NULL, "departures" integer, CONSTRAINT "FK_787a77c226dae9e883477a532e5" FOREIGN KEY ("logNumber") REFERENCES "visit_log" ("number") ON DELETE RESTRICT ON UPDATE NO ACTION, PRIMARY KEY ("logNumber", "rowNumber")) WITHOUT ROWID`,
    );
    await queryRunner.query(`CREATE INDEX "hourly_count_hour" ON "hourly_count" ("logNumber", "localHour") `);
  }

  public async down(queryRunner: QueryRunner): Promise<void> {
    await queryRunner.query(`DROP INDEX "hourly_count_hour"`);
    await queryRunner.query(`DROP TABLE "hourly_count"`);
    await queryRunner.query(`ALTER TABLE "arrival_model" DROP COLUMN "staysFrom"`);
    await queryRunner.query(`ALTER TABLE "visit_log" DROP COLUMN "statedStays"`);
    await queryRunner.query(`ALTER TABLE "visit_log" DROP COLUMN "kind"`);
  }
}
