import type { MigrationInterface, QueryRunner } from 'typeorm';

export class Acknowledgement1796108180497 implements MigrationInterface {
  name = 'Acknowledgement1796108180497';

  public async up(queryRunner: QueryRunner): Promise<void> {
    await queryRunner.query(
      `CREATE TABLE "acknowledgement" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "areaId" text NOT NULL, "outlookId" text NOT NULL, "fromAt" integer NOT NULL, "untilAt" integer NOT NULL, "hours" text NOT NULL, "note" text NOT NULL, "by" text NOT NULL, "at" integer NOT NULL, CONSTRAINT "FK_a418488230525ff84777bd639c4" FOREIGN KEY ("siteId") REFERENCES "site" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION, CONSTRAINT "FK_b4f4b7a47bd1052534e294c81ac" FOREIGN KEY ("areaId") REFERENCES "care_area" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION, CONSTRAINT "FK_675f79ad2a81a50e2fc921bcbf4" FOREIGN KEY ("outlookId") REFERENCES "outlook" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION)`,
    );
    await queryRunner.query(`CREATE INDEX "IDX_0c2f913ecaef0643165fcb4f6e" ON "acknowledgement" ("siteId", "at") `);
  }

  public async down(queryRunner: QueryRunner): Promise<void> {
    await queryRunner.query(`DROP INDEX "IDX_0c2f913ecaef0643165fcb4f6e"`);
    await queryRunner.query(`DROP TABLE "acknowledgement"`);
  }
}
