import type { MigrationInterface, QueryRunner } from 'typeorm';

/** How a plan was adopted: as dated exceptions, as all were before, or as the weekly plan. */
export class AdoptedAs1796116000003 implements MigrationInterface {
  name = 'AdoptedAs1796116000003';

  public async up(queryRunner: QueryRunner): Promise<void> {
    await queryRunner.query(`ALTER TABLE "scenario" ADD COLUMN "adoptedAs" text`);
    await queryRunner.query(`UPDATE "scenario" SET "adoptedAs" = 'these dates' WHERE "adoptedAt" IS NOT NULL`);
  }

  public async down(queryRunner: QueryRunner): Promise<void> {
    await queryRunner.query(`ALTER TABLE "scenario" DROP COLUMN "adoptedAs"`);
  }
}
