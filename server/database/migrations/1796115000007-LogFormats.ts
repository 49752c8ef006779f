import type { MigrationInterface, QueryRunner } from 'typeorm';

/** How long a site keeps visits, and where the period of a log began before its old visits were deleted. */
export class LogFormats1796115000007 implements MigrationInterface {
  name = 'LogFormats1796115000007';

  public async up(queryRunner: QueryRunner): Promise<void> {
    await queryRunner.query(`ALTER TABLE "site" ADD COLUMN "visitRetentionDays" integer NOT NULL DEFAULT (1095)`);
    await queryRunner.query(`ALTER TABLE "visit_log" ADD COLUMN "statedFrom" integer`);
  }

  public async down(queryRunner: QueryRunner): Promise<void> {
    await queryRunner.query(`ALTER TABLE "visit_log" DROP COLUMN "statedFrom"`);
    await queryRunner.query(`ALTER TABLE "site" DROP COLUMN "visitRetentionDays"`);
  }
}
