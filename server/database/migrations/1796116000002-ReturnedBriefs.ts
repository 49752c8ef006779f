import type { MigrationInterface, QueryRunner } from 'typeorm';

export class ReturnedBriefs1796116000002 implements MigrationInterface {
  name = 'ReturnedBriefs1796116000002';

  public async up(queryRunner: QueryRunner): Promise<void> {
    await queryRunner.query(`ALTER TABLE "brief_delivery" ADD COLUMN "returnedAt" integer`);
    await queryRunner.query(`ALTER TABLE "brief_delivery" ADD COLUMN "returnedBecause" text`);
    await queryRunner.query(`ALTER TABLE "brief_recipient" ADD COLUMN "returnedAt" integer`);
  }

  public async down(queryRunner: QueryRunner): Promise<void> {
    await queryRunner.query(`ALTER TABLE "brief_recipient" DROP COLUMN "returnedAt"`);
    await queryRunner.query(`ALTER TABLE "brief_delivery" DROP COLUMN "returnedBecause"`);
    await queryRunner.query(`ALTER TABLE "brief_delivery" DROP COLUMN "returnedAt"`);
  }
}
