import type { MigrationInterface, QueryRunner } from 'typeorm';

/** A page that asks for the visits of a few hours would otherwise read the whole of every log. */
export class VisitArrivalIndex1796114000000 implements MigrationInterface {
  name = 'VisitArrivalIndex1796114000000';

  async up(queryRunner: QueryRunner): Promise<void> {
    await queryRunner.query('CREATE INDEX "visit_arrival" ON "visit" ("logNumber", "arrivalAt")');
  }

  async down(queryRunner: QueryRunner): Promise<void> {
    await queryRunner.query('DROP INDEX "visit_arrival"');
  }
}
