import type { MigrationInterface, QueryRunner } from 'typeorm';

/** Columns are added in place: a table that everything refers to is never dropped and filled again. */
export class SiteSettings1796115000002 implements MigrationInterface {
  name = 'SiteSettings1796115000002';

  public async up(queryRunner: QueryRunner): Promise<void> {
    await queryRunner.query(`ALTER TABLE "site" ADD COLUMN "bedMeetingMinutes" text NOT NULL DEFAULT ('[600,960]')`);
    await queryRunner.query(`ALTER TABLE "site" ADD COLUMN "waitLimitMinutes" integer`);
    await queryRunner.query(`ALTER TABLE "care_area" ADD COLUMN "bedsPerNurse" real`);
    await queryRunner.query(`ALTER TABLE "care_area" ADD COLUMN "lendsTo" text NOT NULL DEFAULT ('[]')`);
    await queryRunner.query(`ALTER TABLE "shift" ADD COLUMN "leadTimeHours" integer`);
    await queryRunner.query(
      `CREATE TABLE "setting_change" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "at" integer NOT NULL, "madeBy" text NOT NULL, "section" text NOT NULL, "subject" text, "setting" text NOT NULL, "before" text, "after" text, CONSTRAINT "FK_49182f667c89a3742d2afb2e3c9" FOREIGN KEY ("siteId") REFERENCES "site" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION)`,
    );
    await queryRunner.query(`CREATE INDEX "IDX_fb67e445d421f4a2064ce66444" ON "setting_change" ("siteId", "at")`);
  }

  public async down(queryRunner: QueryRunner): Promise<void> {
    await queryRunner.query(`DROP TABLE "setting_change"`);
    await queryRunner.query(`ALTER TABLE "shift" DROP COLUMN "leadTimeHours"`);
    await queryRunner.query(`ALTER TABLE "care_area" DROP COLUMN "lendsTo"`);
    await queryRunner.query(`ALTER TABLE "care_area" DROP COLUMN "bedsPerNurse"`);
    await queryRunner.query(`ALTER TABLE "site" DROP COLUMN "waitLimitMinutes"`);
    await queryRunner.query(`ALTER TABLE "site" DROP COLUMN "bedMeetingMinutes"`);
  }
}
