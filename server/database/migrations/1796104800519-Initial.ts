import type { MigrationInterface, QueryRunner } from 'typeorm';

export class Initial1796104800519 implements MigrationInterface {
  name = 'Initial1796104800519';

  public async up(queryRunner: QueryRunner): Promise<void> {
    await queryRunner.query(
      `CREATE TABLE "arrival_model" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "status" text NOT NULL, "createdAt" integer NOT NULL, "fittedByPersonId" text NOT NULL, "fittedBy" text NOT NULL, "fittedAt" integer, "approvedBy" text, "approvedAt" integer, "retiredAt" integer, "reason" text, "error" text, "jobId" text, "refreshedFromId" text, "refreshedAt" integer, "engineVersion" text NOT NULL, "trainedFrom" integer, "trainedTo" integer, "visits" integer NOT NULL DEFAULT (0), "lineage" text NOT NULL DEFAULT ('[]'), "parameters" text, "detail" text)`,
    );
    await queryRunner.query(`CREATE INDEX "IDX_807d529d04f4c5f525d0065cc8" ON "arrival_model" ("siteId", "status") `);
    await queryRunner.query(
      `CREATE TABLE "audit_event" ("id" integer PRIMARY KEY AUTOINCREMENT NOT NULL, "at" integer NOT NULL, "personId" text, "actor" text NOT NULL, "siteId" text, "event" text NOT NULL, "subject" text NOT NULL, "detail" text NOT NULL, "address" text, "requestId" text)`,
    );
    await queryRunner.query(`CREATE INDEX "IDX_5b195f20fa8e4e617b547ed907" ON "audit_event" ("siteId", "at") `);
    await queryRunner.query(
      `CREATE TABLE "bed_change" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "areaId" text NOT NULL, "kind" text NOT NULL, "fromAt" integer NOT NULL, "untilAt" integer NOT NULL, "beds" integer NOT NULL, "blocked" integer NOT NULL, "reason" text NOT NULL, "madeBy" text NOT NULL, "madeAt" integer NOT NULL)`,
    );
    await queryRunner.query(`CREATE INDEX "IDX_da497c032f45dd417ad35677ff" ON "bed_change" ("siteId", "untilAt") `);
    await queryRunner.query(
      `CREATE TABLE "calendar_entry" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "date" text NOT NULL, "kind" text NOT NULL, "name" text NOT NULL, "statedEffect" text)`,
    );
    await queryRunner.query(`CREATE INDEX "IDX_ac7c8681c6e1af48f6a0e5d25c" ON "calendar_entry" ("siteId", "date") `);
    await queryRunner.query(
      `CREATE TABLE "care_area" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "code" integer NOT NULL, "name" text NOT NULL, "position" integer NOT NULL, "spaceKind" text NOT NULL, "spaces" integer NOT NULL, "safeMinimum" integer NOT NULL, "bedStep" integer NOT NULL, "noticeHours" real NOT NULL, "alertLimit" real NOT NULL, "escalationNote" text NOT NULL)`,
    );
    await queryRunner.query(`CREATE UNIQUE INDEX "IDX_5ffb6a0a4b9b7937a50eb627ca" ON "care_area" ("siteId", "name") `);
    await queryRunner.query(`CREATE UNIQUE INDEX "IDX_6c67be036afc19b944db3ce6ca" ON "care_area" ("siteId", "code") `);
    await queryRunner.query(
      `CREATE TABLE "census" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "takenAt" integer NOT NULL, "savedAt" integer NOT NULL, "enteredBy" text NOT NULL, "undecidedWaiting" integer, "ambulancesHolding" integer, "arrivalsSinceMidnight" integer)`,
    );
    await queryRunner.query(`CREATE INDEX "IDX_1154e1d8d8e53acfe9bcc2ad8a" ON "census" ("siteId", "takenAt") `);
    await queryRunner.query(
      `CREATE TABLE "census_area" ("censusId" text NOT NULL, "areaId" text NOT NULL, "takenAt" integer NOT NULL, "savedAt" integer NOT NULL, "present" integer NOT NULL, "waiting" integer NOT NULL, "boarding" integer NOT NULL, PRIMARY KEY ("censusId", "areaId"))`,
    );
    await queryRunner.query(`CREATE INDEX "IDX_70df1b8d2b7e1ce4c34ec47c91" ON "census_area" ("areaId", "takenAt") `);
    await queryRunner.query(
      `CREATE TABLE "exposure_gap" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "areaId" text, "fromAt" integer NOT NULL, "untilAt" integer NOT NULL, "reason" text NOT NULL)`,
    );
    await queryRunner.query(`CREATE INDEX "IDX_9c4f1def192186b3c85eed5b1a" ON "exposure_gap" ("siteId") `);
    await queryRunner.query(`CREATE TABLE "health_group" ("id" text PRIMARY KEY NOT NULL, "name" text NOT NULL)`);
    await queryRunner.query(
      `CREATE TABLE "job" ("id" text PRIMARY KEY NOT NULL, "kind" text NOT NULL, "title" text NOT NULL, "siteId" text, "payload" text NOT NULL, "status" text NOT NULL, "attempts" integer NOT NULL, "maxAttempts" integer NOT NULL, "runAfter" integer NOT NULL, "leaseUntil" integer, "progress" real NOT NULL, "progressText" text NOT NULL, "error" text, "createdBy" text NOT NULL, "createdAt" integer NOT NULL, "startedAt" integer, "endedAt" integer)`,
    );
    await queryRunner.query(`CREATE INDEX "IDX_4593c6cf6b29b8b284663b97a2" ON "job" ("siteId", "createdAt") `);
    await queryRunner.query(`CREATE INDEX "IDX_0c5b24eac4a0b8249da1e1142a" ON "job" ("status", "runAfter") `);
    await queryRunner.query(
      `CREATE TABLE "membership" ("id" text PRIMARY KEY NOT NULL, "personId" text NOT NULL, "role" text NOT NULL, "siteId" text, "groupId" text, "endsAt" integer, "createdAt" integer NOT NULL)`,
    );
    await queryRunner.query(`CREATE INDEX "IDX_27596f83abf11927b07021ea2c" ON "membership" ("personId") `);
    await queryRunner.query(
      `CREATE TABLE "outlook" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "issuedAt" integer NOT NULL, "trigger" text NOT NULL, "modelId" text NOT NULL, "seed" integer NOT NULL, "replications" integer NOT NULL, "engineVersion" text NOT NULL, "softwareVersion" text NOT NULL, "computeMilliseconds" real NOT NULL, "input" text NOT NULL, "result" text NOT NULL, "digest" text NOT NULL)`,
    );
    await queryRunner.query(`CREATE INDEX "IDX_203c3a1fd830f833739498227b" ON "outlook" ("siteId", "issuedAt") `);
    await queryRunner.query(
      `CREATE TABLE "person" ("id" text PRIMARY KEY NOT NULL, "issuer" text, "subject" text, "name" text NOT NULL, "email" text NOT NULL, "createdAt" integer NOT NULL, "lastSignInAt" integer)`,
    );
    await queryRunner.query(`CREATE INDEX "IDX_d2d717efd90709ebd3cb26b936" ON "person" ("email") `);
    await queryRunner.query(`CREATE UNIQUE INDEX "IDX_c35338eab525d35551692792ba" ON "person" ("issuer", "subject") `);
    await queryRunner.query(
      `CREATE TABLE "session" ("sid" text PRIMARY KEY NOT NULL, "expiresAt" integer NOT NULL, "data" text NOT NULL)`,
    );
    await queryRunner.query(`CREATE INDEX "IDX_5d97cf9773002b16861b4bb8ae" ON "session" ("expiresAt") `);
    await queryRunner.query(
      `CREATE TABLE "shift" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "name" text NOT NULL, "startMinute" integer NOT NULL, "endMinute" integer NOT NULL)`,
    );
    await queryRunner.query(`CREATE INDEX "IDX_e2a11b51667ba2b28628d612a5" ON "shift" ("siteId") `);
    await queryRunner.query(
      `CREATE TABLE "site" ("id" text PRIMARY KEY NOT NULL, "groupId" text NOT NULL, "name" text NOT NULL, "timeZone" text NOT NULL, "country" text NOT NULL, "region" text, "planningRisk" real NOT NULL, "stayCapHours" integer NOT NULL DEFAULT (72), "smallNumberMinimum" integer NOT NULL DEFAULT (5))`,
    );
    await queryRunner.query(
      `CREATE TABLE "staffed_bed_plan" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "version" integer NOT NULL, "savedAt" integer NOT NULL, "savedBy" text NOT NULL, "reason" text NOT NULL)`,
    );
    await queryRunner.query(
      `CREATE UNIQUE INDEX "IDX_39da626abc1a72559e71db964a" ON "staffed_bed_plan" ("siteId", "version") `,
    );
    await queryRunner.query(
      `CREATE TABLE "staffed_bed_plan_area" ("planId" text NOT NULL, "areaId" text NOT NULL, "halfHours" text NOT NULL, PRIMARY KEY ("planId", "areaId"))`,
    );
    await queryRunner.query(
      `CREATE TABLE "visit" ("logNumber" integer NOT NULL, "rowNumber" integer NOT NULL, "areaCode" integer NOT NULL, "arrivalAt" integer NOT NULL, "bedSpaceAt" integer, "admissionDecisionAt" integer, "departureAt" integer, "disposition" integer, "byAmbulance" integer, PRIMARY KEY ("logNumber", "rowNumber")) WITHOUT ROWID`,
    );
    await queryRunner.query(
      `CREATE TABLE "visit_log" ("id" text PRIMARY KEY NOT NULL, "number" integer NOT NULL, "siteId" text NOT NULL, "status" text NOT NULL, "fileName" text NOT NULL, "sha256" text NOT NULL, "rows" integer NOT NULL, "periodFrom" integer NOT NULL, "periodTo" integer NOT NULL, "selectedBy" text NOT NULL, "takenAt" integer NOT NULL, "missingDeparture" text NOT NULL, "problems" text NOT NULL, "visitsByArea" text NOT NULL, "uploadedBy" text NOT NULL, "uploadedAt" integer NOT NULL, "readyAt" integer, "withdrawnBy" text, "withdrawnAt" integer, "reason" text, "jobId" text, CONSTRAINT "UQ_d50e08639c9464392ed681a0386" UNIQUE ("number"))`,
    );
    await queryRunner.query(
      `CREATE UNIQUE INDEX "IDX_556b8393b2302636cd04bc8c2c" ON "visit_log" ("siteId", "sha256") WHERE "status" IN ('loading', 'ready')`,
    );
    await queryRunner.query(`CREATE INDEX "IDX_1c41fd99e4a5027f71ca2c4ec6" ON "visit_log" ("siteId", "uploadedAt") `);
    await queryRunner.query(`DROP INDEX "IDX_807d529d04f4c5f525d0065cc8"`);
    await queryRunner.query(
      `CREATE TABLE "temporary_arrival_model" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "status" text NOT NULL, "createdAt" integer NOT NULL, "fittedByPersonId" text NOT NULL, "fittedBy" text NOT NULL, "fittedAt" integer, "approvedBy" text, "approvedAt" integer, "retiredAt" integer, "reason" text, "error" text, "jobId" text, "refreshedFromId" text, "refreshedAt" integer, "engineVersion" text NOT NULL, "trainedFrom" integer, "trainedTo" integer, "visits" integer NOT NULL DEFAULT (0), "lineage" text NOT NULL DEFAULT ('[]'), "parameters" text, "detail" text, CONSTRAINT "FK_e8eb9aefd485bba9fc983a8b9f9" FOREIGN KEY ("siteId") REFERENCES "site" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION)`,
    );
    await queryRunner.query(
      `INSERT INTO "temporary_arrival_model"("id", "siteId", "status", "createdAt", "fittedByPersonId", "fittedBy", "fittedAt", "approvedBy", "approvedAt", "retiredAt", "reason", "error", "jobId", "refreshedFromId", "refreshedAt", "engineVersion", "trainedFrom", "trainedTo", "visits", "lineage", "parameters", "detail") SELECT "id", "siteId", "status", "createdAt", "fittedByPersonId", "fittedBy", "fittedAt", "approvedBy", "approvedAt", "retiredAt", "reason", "error", "jobId", "refreshedFromId", "refreshedAt", "engineVersion", "trainedFrom", "trainedTo", "visits", "lineage", "parameters", "detail" FROM "arrival_model"`,
    );
    await queryRunner.query(`DROP TABLE "arrival_model"`);
    await queryRunner.query(`ALTER TABLE "temporary_arrival_model" RENAME TO "arrival_model"`);
    await queryRunner.query(`CREATE INDEX "IDX_807d529d04f4c5f525d0065cc8" ON "arrival_model" ("siteId", "status") `);
    await queryRunner.query(`DROP INDEX "IDX_da497c032f45dd417ad35677ff"`);
    await queryRunner.query(
      `CREATE TABLE "temporary_bed_change" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "areaId" text NOT NULL, "kind" text NOT NULL, "fromAt" integer NOT NULL, "untilAt" integer NOT NULL, "beds" integer NOT NULL, "blocked" integer NOT NULL, "reason" text NOT NULL, "madeBy" text NOT NULL, "madeAt" integer NOT NULL, CONSTRAINT "FK_c2c0716c9f3e9f8deef4419ab65" FOREIGN KEY ("siteId") REFERENCES "site" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION, CONSTRAINT "FK_04d7402151cd76915ac6bb51700" FOREIGN KEY ("areaId") REFERENCES "care_area" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION)`,
    );
    await queryRunner.query(
      `INSERT INTO "temporary_bed_change"("id", "siteId", "areaId", "kind", "fromAt", "untilAt", "beds", "blocked", "reason", "madeBy", "madeAt") SELECT "id", "siteId", "areaId", "kind", "fromAt", "untilAt", "beds", "blocked", "reason", "madeBy", "madeAt" FROM "bed_change"`,
    );
    await queryRunner.query(`DROP TABLE "bed_change"`);
    await queryRunner.query(`ALTER TABLE "temporary_bed_change" RENAME TO "bed_change"`);
    await queryRunner.query(`CREATE INDEX "IDX_da497c032f45dd417ad35677ff" ON "bed_change" ("siteId", "untilAt") `);
    await queryRunner.query(`DROP INDEX "IDX_ac7c8681c6e1af48f6a0e5d25c"`);
    await queryRunner.query(
      `CREATE TABLE "temporary_calendar_entry" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "date" text NOT NULL, "kind" text NOT NULL, "name" text NOT NULL, "statedEffect" text, CONSTRAINT "FK_449f8c2d5e70802e5ff57c8d453" FOREIGN KEY ("siteId") REFERENCES "site" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION)`,
    );
    await queryRunner.query(
      `INSERT INTO "temporary_calendar_entry"("id", "siteId", "date", "kind", "name", "statedEffect") SELECT "id", "siteId", "date", "kind", "name", "statedEffect" FROM "calendar_entry"`,
    );
    await queryRunner.query(`DROP TABLE "calendar_entry"`);
    await queryRunner.query(`ALTER TABLE "temporary_calendar_entry" RENAME TO "calendar_entry"`);
    await queryRunner.query(`CREATE INDEX "IDX_ac7c8681c6e1af48f6a0e5d25c" ON "calendar_entry" ("siteId", "date") `);
    await queryRunner.query(`DROP INDEX "IDX_5ffb6a0a4b9b7937a50eb627ca"`);
    await queryRunner.query(`DROP INDEX "IDX_6c67be036afc19b944db3ce6ca"`);
    await queryRunner.query(
      `CREATE TABLE "temporary_care_area" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "code" integer NOT NULL, "name" text NOT NULL, "position" integer NOT NULL, "spaceKind" text NOT NULL, "spaces" integer NOT NULL, "safeMinimum" integer NOT NULL, "bedStep" integer NOT NULL, "noticeHours" real NOT NULL, "alertLimit" real NOT NULL, "escalationNote" text NOT NULL, CONSTRAINT "FK_de6cd05b82cb01397b63ac0675c" FOREIGN KEY ("siteId") REFERENCES "site" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION)`,
    );
    await queryRunner.query(
      `INSERT INTO "temporary_care_area"("id", "siteId", "code", "name", "position", "spaceKind", "spaces", "safeMinimum", "bedStep", "noticeHours", "alertLimit", "escalationNote") SELECT "id", "siteId", "code", "name", "position", "spaceKind", "spaces", "safeMinimum", "bedStep", "noticeHours", "alertLimit", "escalationNote" FROM "care_area"`,
    );
    await queryRunner.query(`DROP TABLE "care_area"`);
    await queryRunner.query(`ALTER TABLE "temporary_care_area" RENAME TO "care_area"`);
    await queryRunner.query(`CREATE UNIQUE INDEX "IDX_5ffb6a0a4b9b7937a50eb627ca" ON "care_area" ("siteId", "name") `);
    await queryRunner.query(`CREATE UNIQUE INDEX "IDX_6c67be036afc19b944db3ce6ca" ON "care_area" ("siteId", "code") `);
    await queryRunner.query(`DROP INDEX "IDX_1154e1d8d8e53acfe9bcc2ad8a"`);
    await queryRunner.query(
      `CREATE TABLE "temporary_census" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "takenAt" integer NOT NULL, "savedAt" integer NOT NULL, "enteredBy" text NOT NULL, "undecidedWaiting" integer, "ambulancesHolding" integer, "arrivalsSinceMidnight" integer, CONSTRAINT "FK_f5080924136facdcf8cab42010a" FOREIGN KEY ("siteId") REFERENCES "site" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION)`,
    );
    await queryRunner.query(
      `INSERT INTO "temporary_census"("id", "siteId", "takenAt", "savedAt", "enteredBy", "undecidedWaiting", "ambulancesHolding", "arrivalsSinceMidnight") SELECT "id", "siteId", "takenAt", "savedAt", "enteredBy", "undecidedWaiting", "ambulancesHolding", "arrivalsSinceMidnight" FROM "census"`,
    );
    await queryRunner.query(`DROP TABLE "census"`);
    await queryRunner.query(`ALTER TABLE "temporary_census" RENAME TO "census"`);
    await queryRunner.query(`CREATE INDEX "IDX_1154e1d8d8e53acfe9bcc2ad8a" ON "census" ("siteId", "takenAt") `);
    await queryRunner.query(`DROP INDEX "IDX_70df1b8d2b7e1ce4c34ec47c91"`);
    await queryRunner.query(
      `CREATE TABLE "temporary_census_area" ("censusId" text NOT NULL, "areaId" text NOT NULL, "takenAt" integer NOT NULL, "savedAt" integer NOT NULL, "present" integer NOT NULL, "waiting" integer NOT NULL, "boarding" integer NOT NULL, CONSTRAINT "FK_700e8bbb26e1c38be0ea58aaeae" FOREIGN KEY ("censusId") REFERENCES "census" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION, CONSTRAINT "FK_37e1efd42d2e8618848c751b9e1" FOREIGN KEY ("areaId") REFERENCES "care_area" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION, PRIMARY KEY ("censusId", "areaId"))`,
    );
    await queryRunner.query(
      `INSERT INTO "temporary_census_area"("censusId", "areaId", "takenAt", "savedAt", "present", "waiting", "boarding") SELECT "censusId", "areaId", "takenAt", "savedAt", "present", "waiting", "boarding" FROM "census_area"`,
    );
    await queryRunner.query(`DROP TABLE "census_area"`);
    await queryRunner.query(`ALTER TABLE "temporary_census_area" RENAME TO "census_area"`);
    await queryRunner.query(`CREATE INDEX "IDX_70df1b8d2b7e1ce4c34ec47c91" ON "census_area" ("areaId", "takenAt") `);
    await queryRunner.query(`DROP INDEX "IDX_9c4f1def192186b3c85eed5b1a"`);
    await queryRunner.query(
      `CREATE TABLE "temporary_exposure_gap" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "areaId" text, "fromAt" integer NOT NULL, "untilAt" integer NOT NULL, "reason" text NOT NULL, CONSTRAINT "FK_9c4f1def192186b3c85eed5b1a3" FOREIGN KEY ("siteId") REFERENCES "site" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION, CONSTRAINT "FK_fe2dd6d536750f5b72e8ee8a528" FOREIGN KEY ("areaId") REFERENCES "care_area" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION)`,
    );
    await queryRunner.query(
      `INSERT INTO "temporary_exposure_gap"("id", "siteId", "areaId", "fromAt", "untilAt", "reason") SELECT "id", "siteId", "areaId", "fromAt", "untilAt", "reason" FROM "exposure_gap"`,
    );
    await queryRunner.query(`DROP TABLE "exposure_gap"`);
    await queryRunner.query(`ALTER TABLE "temporary_exposure_gap" RENAME TO "exposure_gap"`);
    await queryRunner.query(`CREATE INDEX "IDX_9c4f1def192186b3c85eed5b1a" ON "exposure_gap" ("siteId") `);
    await queryRunner.query(`DROP INDEX "IDX_4593c6cf6b29b8b284663b97a2"`);
    await queryRunner.query(`DROP INDEX "IDX_0c5b24eac4a0b8249da1e1142a"`);
    await queryRunner.query(
      `CREATE TABLE "temporary_job" ("id" text PRIMARY KEY NOT NULL, "kind" text NOT NULL, "title" text NOT NULL, "siteId" text, "payload" text NOT NULL, "status" text NOT NULL, "attempts" integer NOT NULL, "maxAttempts" integer NOT NULL, "runAfter" integer NOT NULL, "leaseUntil" integer, "progress" real NOT NULL, "progressText" text NOT NULL, "error" text, "createdBy" text NOT NULL, "createdAt" integer NOT NULL, "startedAt" integer, "endedAt" integer, CONSTRAINT "FK_7d4a893d247dff17f593c654456" FOREIGN KEY ("siteId") REFERENCES "site" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION)`,
    );
    await queryRunner.query(
      `INSERT INTO "temporary_job"("id", "kind", "title", "siteId", "payload", "status", "attempts", "maxAttempts", "runAfter", "leaseUntil", "progress", "progressText", "error", "createdBy", "createdAt", "startedAt", "endedAt") SELECT "id", "kind", "title", "siteId", "payload", "status", "attempts", "maxAttempts", "runAfter", "leaseUntil", "progress", "progressText", "error", "createdBy", "createdAt", "startedAt", "endedAt" FROM "job"`,
    );
    await queryRunner.query(`DROP TABLE "job"`);
    await queryRunner.query(`ALTER TABLE "temporary_job" RENAME TO "job"`);
    await queryRunner.query(`CREATE INDEX "IDX_4593c6cf6b29b8b284663b97a2" ON "job" ("siteId", "createdAt") `);
    await queryRunner.query(`CREATE INDEX "IDX_0c5b24eac4a0b8249da1e1142a" ON "job" ("status", "runAfter") `);
    await queryRunner.query(`DROP INDEX "IDX_27596f83abf11927b07021ea2c"`);
    await queryRunner.query(
      `CREATE TABLE "temporary_membership" ("id" text PRIMARY KEY NOT NULL, "personId" text NOT NULL, "role" text NOT NULL, "siteId" text, "groupId" text, "endsAt" integer, "createdAt" integer NOT NULL, CONSTRAINT "FK_27596f83abf11927b07021ea2c8" FOREIGN KEY ("personId") REFERENCES "person" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION, CONSTRAINT "FK_0835e883aa1ea65e9047bc2620b" FOREIGN KEY ("siteId") REFERENCES "site" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION, CONSTRAINT "FK_8bc1674087575acecf0a648fc91" FOREIGN KEY ("groupId") REFERENCES "health_group" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION)`,
    );
    await queryRunner.query(
      `INSERT INTO "temporary_membership"("id", "personId", "role", "siteId", "groupId", "endsAt", "createdAt") SELECT "id", "personId", "role", "siteId", "groupId", "endsAt", "createdAt" FROM "membership"`,
    );
    await queryRunner.query(`DROP TABLE "membership"`);
    await queryRunner.query(`ALTER TABLE "temporary_membership" RENAME TO "membership"`);
    await queryRunner.query(`CREATE INDEX "IDX_27596f83abf11927b07021ea2c" ON "membership" ("personId") `);
    await queryRunner.query(`DROP INDEX "IDX_203c3a1fd830f833739498227b"`);
    await queryRunner.query(
      `CREATE TABLE "temporary_outlook" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "issuedAt" integer NOT NULL, "trigger" text NOT NULL, "modelId" text NOT NULL, "seed" integer NOT NULL, "replications" integer NOT NULL, "engineVersion" text NOT NULL, "softwareVersion" text NOT NULL, "computeMilliseconds" real NOT NULL, "input" text NOT NULL, "result" text NOT NULL, "digest" text NOT NULL, CONSTRAINT "FK_7da8570e0ae99dbfa94fde743dc" FOREIGN KEY ("siteId") REFERENCES "site" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION, CONSTRAINT "FK_dd76b4ea51ca2ff677588d811da" FOREIGN KEY ("modelId") REFERENCES "arrival_model" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION)`,
    );
    await queryRunner.query(
      `INSERT INTO "temporary_outlook"("id", "siteId", "issuedAt", "trigger", "modelId", "seed", "replications", "engineVersion", "softwareVersion", "computeMilliseconds", "input", "result", "digest") SELECT "id", "siteId", "issuedAt", "trigger", "modelId", "seed", "replications", "engineVersion", "softwareVersion", "computeMilliseconds", "input", "result", "digest" FROM "outlook"`,
    );
    await queryRunner.query(`DROP TABLE "outlook"`);
    await queryRunner.query(`ALTER TABLE "temporary_outlook" RENAME TO "outlook"`);
    await queryRunner.query(`CREATE INDEX "IDX_203c3a1fd830f833739498227b" ON "outlook" ("siteId", "issuedAt") `);
    await queryRunner.query(`DROP INDEX "IDX_e2a11b51667ba2b28628d612a5"`);
    await queryRunner.query(
      `CREATE TABLE "temporary_shift" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "name" text NOT NULL, "startMinute" integer NOT NULL, "endMinute" integer NOT NULL, CONSTRAINT "FK_e2a11b51667ba2b28628d612a56" FOREIGN KEY ("siteId") REFERENCES "site" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION)`,
    );
    await queryRunner.query(
      `INSERT INTO "temporary_shift"("id", "siteId", "name", "startMinute", "endMinute") SELECT "id", "siteId", "name", "startMinute", "endMinute" FROM "shift"`,
    );
    await queryRunner.query(`DROP TABLE "shift"`);
    await queryRunner.query(`ALTER TABLE "temporary_shift" RENAME TO "shift"`);
    await queryRunner.query(`CREATE INDEX "IDX_e2a11b51667ba2b28628d612a5" ON "shift" ("siteId") `);
    await queryRunner.query(
      `CREATE TABLE "temporary_site" ("id" text PRIMARY KEY NOT NULL, "groupId" text NOT NULL, "name" text NOT NULL, "timeZone" text NOT NULL, "country" text NOT NULL, "region" text, "planningRisk" real NOT NULL, "stayCapHours" integer NOT NULL DEFAULT (72), "smallNumberMinimum" integer NOT NULL DEFAULT (5), CONSTRAINT "FK_02bf067392d3fc2d1f0edf294d1" FOREIGN KEY ("groupId") REFERENCES "health_group" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION)`,
    );
    await queryRunner.query(
      `INSERT INTO "temporary_site"("id", "groupId", "name", "timeZone", "country", "region", "planningRisk", "stayCapHours", "smallNumberMinimum") SELECT "id", "groupId", "name", "timeZone", "country", "region", "planningRisk", "stayCapHours", "smallNumberMinimum" FROM "site"`,
    );
    await queryRunner.query(`DROP TABLE "site"`);
    await queryRunner.query(`ALTER TABLE "temporary_site" RENAME TO "site"`);
    await queryRunner.query(`DROP INDEX "IDX_39da626abc1a72559e71db964a"`);
    await queryRunner.query(
      `CREATE TABLE "temporary_staffed_bed_plan" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "version" integer NOT NULL, "savedAt" integer NOT NULL, "savedBy" text NOT NULL, "reason" text NOT NULL, CONSTRAINT "FK_8203c74f42ead0d847d38a5ec90" FOREIGN KEY ("siteId") REFERENCES "site" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION)`,
    );
    await queryRunner.query(
      `INSERT INTO "temporary_staffed_bed_plan"("id", "siteId", "version", "savedAt", "savedBy", "reason") SELECT "id", "siteId", "version", "savedAt", "savedBy", "reason" FROM "staffed_bed_plan"`,
    );
    await queryRunner.query(`DROP TABLE "staffed_bed_plan"`);
    await queryRunner.query(`ALTER TABLE "temporary_staffed_bed_plan" RENAME TO "staffed_bed_plan"`);
    await queryRunner.query(
      `CREATE UNIQUE INDEX "IDX_39da626abc1a72559e71db964a" ON "staffed_bed_plan" ("siteId", "version") `,
    );
    await queryRunner.query(
      `CREATE TABLE "temporary_staffed_bed_plan_area" ("planId" text NOT NULL, "areaId" text NOT NULL, "halfHours" text NOT NULL, CONSTRAINT "FK_0fb0de9851618d7f417250200aa" FOREIGN KEY ("planId") REFERENCES "staffed_bed_plan" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION, CONSTRAINT "FK_dbf38bb506c3ef9e2c9d262b85b" FOREIGN KEY ("areaId") REFERENCES "care_area" ("id") ON DELETE NO ACTION ON UPDATE NO ACTION, PRIMARY KEY ("planId", "areaId"))`,
    );
    await queryRunner.query(
      `INSERT INTO "temporary_staffed_bed_plan_area"("planId", "areaId", "halfHours") SELECT "planId", "areaId", "halfHours" FROM "staffed_bed_plan_area"`,
    );
    await queryRunner.query(`DROP TABLE "staffed_bed_plan_area"`);
    await queryRunner.query(`ALTER TABLE "temporary_staffed_bed_plan_area" RENAME TO "staffed_bed_plan_area"`);
    await queryRunner.query(
      `CREATE TABLE "temporary_visit" ("logNumber" integer NOT NULL, "rowNumber" integer NOT NULL, "areaCode" integer NOT NULL, "arrivalAt" integer NOT NULL, "bedSpaceAt" integer, "admissionDecisionAt" integer, "departureAt" integer, "disposition" integer, "byAmbulance" integer, CONSTRAINT "FK_723f2b926f2a3448bd286afb88e" FOREIGN KEY ("logNumber") REFERENCES "visit_log" ("number") ON DELETE RESTRICT ON UPDATE NO ACTION, PRIMARY KEY ("logNumber", "rowNumber")) WITHOUT ROWID`,
    );
    await queryRunner.query(
      `INSERT INTO "temporary_visit"("logNumber", "rowNumber", "areaCode", "arrivalAt", "bedSpaceAt", "admissionDecisionAt", "departureAt", "disposition", "byAmbulance") SELECT "logNumber", "rowNumber", "areaCode", "arrivalAt", "bedSpaceAt", "admissionDecisionAt", "departureAt", "disposition", "byAmbulance" FROM "visit"`,
    );
    await queryRunner.query(`DROP TABLE "visit"`);
    await queryRunner.query(`ALTER TABLE "temporary_visit" RENAME TO "visit"`);
    await queryRunner.query(`DROP INDEX "IDX_556b8393b2302636cd04bc8c2c"`);
    await queryRunner.query(`DROP INDEX "IDX_1c41fd99e4a5027f71ca2c4ec6"`);
    await queryRunner.query(
      `CREATE TABLE "temporary_visit_log" ("id" text PRIMARY KEY NOT NULL, "number" integer NOT NULL, "siteId" text NOT NULL, "status" text NOT NULL, "fileName" text NOT NULL, "sha256" text NOT NULL, "rows" integer NOT NULL, "periodFrom" integer NOT NULL, "periodTo" integer NOT NULL, "selectedBy" text NOT NULL, "takenAt" integer NOT NULL, "missingDeparture" text NOT NULL, "problems" text NOT NULL, "visitsByArea" text NOT NULL, "uploadedBy" text NOT NULL, "uploadedAt" integer NOT NULL, "readyAt" integer, "withdrawnBy" text, "withdrawnAt" integer, "reason" text, "jobId" text, CONSTRAINT "UQ_d50e08639c9464392ed681a0386" UNIQUE ("number"), CONSTRAINT "FK_38b986b25b30a93070d7ae4d277" FOREIGN KEY ("siteId") REFERENCES "site" ("id") ON DELETE RESTRICT ON UPDATE NO ACTION)`,
    );
    await queryRunner.query(
      `INSERT INTO "temporary_visit_log"("id", "number", "siteId", "status", "fileName", "sha256", "rows", "periodFrom", "periodTo", "selectedBy", "takenAt", "missingDeparture", "problems", "visitsByArea", "uploadedBy", "uploadedAt", "readyAt", "withdrawnBy", "withdrawnAt", "reason", "jobId") SELECT "id", "number", "siteId", "status", "fileName", "sha256", "rows", "periodFrom", "periodTo", "selectedBy", "takenAt", "missingDeparture", "problems", "visitsByArea", "uploadedBy", "uploadedAt", "readyAt", "withdrawnBy", "withdrawnAt", "reason", "jobId" FROM "visit_log"`,
    );
    await queryRunner.query(`DROP TABLE "visit_log"`);
    await queryRunner.query(`ALTER TABLE "temporary_visit_log" RENAME TO "visit_log"`);
    await queryRunner.query(
      `CREATE UNIQUE INDEX "IDX_556b8393b2302636cd04bc8c2c" ON "visit_log" ("siteId", "sha256") WHERE "status" IN ('loading', 'ready')`,
    );
    await queryRunner.query(`CREATE INDEX "IDX_1c41fd99e4a5027f71ca2c4ec6" ON "visit_log" ("siteId", "uploadedAt") `);
  }

  public async down(queryRunner: QueryRunner): Promise<void> {
    await queryRunner.query(`DROP INDEX "IDX_1c41fd99e4a5027f71ca2c4ec6"`);
    await queryRunner.query(`DROP INDEX "IDX_556b8393b2302636cd04bc8c2c"`);
    await queryRunner.query(`ALTER TABLE "visit_log" RENAME TO "temporary_visit_log"`);
    await queryRunner.query(
      `CREATE TABLE "visit_log" ("id" text PRIMARY KEY NOT NULL, "number" integer NOT NULL, "siteId" text NOT NULL, "status" text NOT NULL, "fileName" text NOT NULL, "sha256" text NOT NULL, "rows" integer NOT NULL, "periodFrom" integer NOT NULL, "periodTo" integer NOT NULL, "selectedBy" text NOT NULL, "takenAt" integer NOT NULL, "missingDeparture" text NOT NULL, "problems" text NOT NULL, "visitsByArea" text NOT NULL, "uploadedBy" text NOT NULL, "uploadedAt" integer NOT NULL, "readyAt" integer, "withdrawnBy" text, "withdrawnAt" integer, "reason" text, "jobId" text, CONSTRAINT "UQ_d50e08639c9464392ed681a0386" UNIQUE ("number"))`,
    );
    await queryRunner.query(
      `INSERT INTO "visit_log"("id", "number", "siteId", "status", "fileName", "sha256", "rows", "periodFrom", "periodTo", "selectedBy", "takenAt", "missingDeparture", "problems", "visitsByArea", "uploadedBy", "uploadedAt", "readyAt", "withdrawnBy", "withdrawnAt", "reason", "jobId") SELECT "id", "number", "siteId", "status", "fileName", "sha256", "rows", "periodFrom", "periodTo", "selectedBy", "takenAt", "missingDeparture", "problems", "visitsByArea", "uploadedBy", "uploadedAt", "readyAt", "withdrawnBy", "withdrawnAt", "reason", "jobId" FROM "temporary_visit_log"`,
    );
    await queryRunner.query(`DROP TABLE "temporary_visit_log"`);
    await queryRunner.query(`CREATE INDEX "IDX_1c41fd99e4a5027f71ca2c4ec6" ON "visit_log" ("siteId", "uploadedAt") `);
    await queryRunner.query(
      `CREATE UNIQUE INDEX "IDX_556b8393b2302636cd04bc8c2c" ON "visit_log" ("siteId", "sha256") WHERE "status" IN ('loading', 'ready')`,
    );
    await queryRunner.query(`ALTER TABLE "visit" RENAME TO "temporary_visit"`);
    await queryRunner.query(
      `CREATE TABLE "visit" ("logNumber" integer NOT NULL, "rowNumber" integer NOT NULL, "areaCode" integer NOT NULL, "arrivalAt" integer NOT NULL, "bedSpaceAt" integer, "admissionDecisionAt" integer, "departureAt" integer, "disposition" integer, "byAmbulance" integer, PRIMARY KEY ("logNumber", "rowNumber")) WITHOUT ROWID`,
    );
    await queryRunner.query(
      `INSERT INTO "visit"("logNumber", "rowNumber", "areaCode", "arrivalAt", "bedSpaceAt", "admissionDecisionAt", "departureAt", "disposition", "byAmbulance") SELECT "logNumber", "rowNumber", "areaCode", "arrivalAt", "bedSpaceAt", "admissionDecisionAt", "departureAt", "disposition", "byAmbulance" FROM "temporary_visit"`,
    );
    await queryRunner.query(`DROP TABLE "temporary_visit"`);
    await queryRunner.query(`ALTER TABLE "staffed_bed_plan_area" RENAME TO "temporary_staffed_bed_plan_area"`);
    await queryRunner.query(
      `CREATE TABLE "staffed_bed_plan_area" ("planId" text NOT NULL, "areaId" text NOT NULL, "halfHours" text NOT NULL, PRIMARY KEY ("planId", "areaId"))`,
    );
    await queryRunner.query(
      `INSERT INTO "staffed_bed_plan_area"("planId", "areaId", "halfHours") SELECT "planId", "areaId", "halfHours" FROM "temporary_staffed_bed_plan_area"`,
    );
    await queryRunner.query(`DROP TABLE "temporary_staffed_bed_plan_area"`);
    await queryRunner.query(`DROP INDEX "IDX_39da626abc1a72559e71db964a"`);
    await queryRunner.query(`ALTER TABLE "staffed_bed_plan" RENAME TO "temporary_staffed_bed_plan"`);
    await queryRunner.query(
      `CREATE TABLE "staffed_bed_plan" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "version" integer NOT NULL, "savedAt" integer NOT NULL, "savedBy" text NOT NULL, "reason" text NOT NULL)`,
    );
    await queryRunner.query(
      `INSERT INTO "staffed_bed_plan"("id", "siteId", "version", "savedAt", "savedBy", "reason") SELECT "id", "siteId", "version", "savedAt", "savedBy", "reason" FROM "temporary_staffed_bed_plan"`,
    );
    await queryRunner.query(`DROP TABLE "temporary_staffed_bed_plan"`);
    await queryRunner.query(
      `CREATE UNIQUE INDEX "IDX_39da626abc1a72559e71db964a" ON "staffed_bed_plan" ("siteId", "version") `,
    );
    await queryRunner.query(`ALTER TABLE "site" RENAME TO "temporary_site"`);
    await queryRunner.query(
      `CREATE TABLE "site" ("id" text PRIMARY KEY NOT NULL, "groupId" text NOT NULL, "name" text NOT NULL, "timeZone" text NOT NULL, "country" text NOT NULL, "region" text, "planningRisk" real NOT NULL, "stayCapHours" integer NOT NULL DEFAULT (72), "smallNumberMinimum" integer NOT NULL DEFAULT (5))`,
    );
    await queryRunner.query(
      `INSERT INTO "site"("id", "groupId", "name", "timeZone", "country", "region", "planningRisk", "stayCapHours", "smallNumberMinimum") SELECT "id", "groupId", "name", "timeZone", "country", "region", "planningRisk", "stayCapHours", "smallNumberMinimum" FROM "temporary_site"`,
    );
    await queryRunner.query(`DROP TABLE "temporary_site"`);
    await queryRunner.query(`DROP INDEX "IDX_e2a11b51667ba2b28628d612a5"`);
    await queryRunner.query(`ALTER TABLE "shift" RENAME TO "temporary_shift"`);
    await queryRunner.query(
      `CREATE TABLE "shift" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "name" text NOT NULL, "startMinute" integer NOT NULL, "endMinute" integer NOT NULL)`,
    );
    await queryRunner.query(
      `INSERT INTO "shift"("id", "siteId", "name", "startMinute", "endMinute") SELECT "id", "siteId", "name", "startMinute", "endMinute" FROM "temporary_shift"`,
    );
    await queryRunner.query(`DROP TABLE "temporary_shift"`);
    await queryRunner.query(`CREATE INDEX "IDX_e2a11b51667ba2b28628d612a5" ON "shift" ("siteId") `);
    await queryRunner.query(`DROP INDEX "IDX_203c3a1fd830f833739498227b"`);
    await queryRunner.query(`ALTER TABLE "outlook" RENAME TO "temporary_outlook"`);
    await queryRunner.query(
      `CREATE TABLE "outlook" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "issuedAt" integer NOT NULL, "trigger" text NOT NULL, "modelId" text NOT NULL, "seed" integer NOT NULL, "replications" integer NOT NULL, "engineVersion" text NOT NULL, "softwareVersion" text NOT NULL, "computeMilliseconds" real NOT NULL, "input" text NOT NULL, "result" text NOT NULL, "digest" text NOT NULL)`,
    );
    await queryRunner.query(
      `INSERT INTO "outlook"("id", "siteId", "issuedAt", "trigger", "modelId", "seed", "replications", "engineVersion", "softwareVersion", "computeMilliseconds", "input", "result", "digest") SELECT "id", "siteId", "issuedAt", "trigger", "modelId", "seed", "replications", "engineVersion", "softwareVersion", "computeMilliseconds", "input", "result", "digest" FROM "temporary_outlook"`,
    );
    await queryRunner.query(`DROP TABLE "temporary_outlook"`);
    await queryRunner.query(`CREATE INDEX "IDX_203c3a1fd830f833739498227b" ON "outlook" ("siteId", "issuedAt") `);
    await queryRunner.query(`DROP INDEX "IDX_27596f83abf11927b07021ea2c"`);
    await queryRunner.query(`ALTER TABLE "membership" RENAME TO "temporary_membership"`);
    await queryRunner.query(
      `CREATE TABLE "membership" ("id" text PRIMARY KEY NOT NULL, "personId" text NOT NULL, "role" text NOT NULL, "siteId" text, "groupId" text, "endsAt" integer, "createdAt" integer NOT NULL)`,
    );
    await queryRunner.query(
      `INSERT INTO "membership"("id", "personId", "role", "siteId", "groupId", "endsAt", "createdAt") SELECT "id", "personId", "role", "siteId", "groupId", "endsAt", "createdAt" FROM "temporary_membership"`,
    );
    await queryRunner.query(`DROP TABLE "temporary_membership"`);
    await queryRunner.query(`CREATE INDEX "IDX_27596f83abf11927b07021ea2c" ON "membership" ("personId") `);
    await queryRunner.query(`DROP INDEX "IDX_0c5b24eac4a0b8249da1e1142a"`);
    await queryRunner.query(`DROP INDEX "IDX_4593c6cf6b29b8b284663b97a2"`);
    await queryRunner.query(`ALTER TABLE "job" RENAME TO "temporary_job"`);
    await queryRunner.query(
      `CREATE TABLE "job" ("id" text PRIMARY KEY NOT NULL, "kind" text NOT NULL, "title" text NOT NULL, "siteId" text, "payload" text NOT NULL, "status" text NOT NULL, "attempts" integer NOT NULL, "maxAttempts" integer NOT NULL, "runAfter" integer NOT NULL, "leaseUntil" integer, "progress" real NOT NULL, "progressText" text NOT NULL, "error" text, "createdBy" text NOT NULL, "createdAt" integer NOT NULL, "startedAt" integer, "endedAt" integer)`,
    );
    await queryRunner.query(
      `INSERT INTO "job"("id", "kind", "title", "siteId", "payload", "status", "attempts", "maxAttempts", "runAfter", "leaseUntil", "progress", "progressText", "error", "createdBy", "createdAt", "startedAt", "endedAt") SELECT "id", "kind", "title", "siteId", "payload", "status", "attempts", "maxAttempts", "runAfter", "leaseUntil", "progress", "progressText", "error", "createdBy", "createdAt", "startedAt", "endedAt" FROM "temporary_job"`,
    );
    await queryRunner.query(`DROP TABLE "temporary_job"`);
    await queryRunner.query(`CREATE INDEX "IDX_0c5b24eac4a0b8249da1e1142a" ON "job" ("status", "runAfter") `);
    await queryRunner.query(`CREATE INDEX "IDX_4593c6cf6b29b8b284663b97a2" ON "job" ("siteId", "createdAt") `);
    await queryRunner.query(`DROP INDEX "IDX_9c4f1def192186b3c85eed5b1a"`);
    await queryRunner.query(`ALTER TABLE "exposure_gap" RENAME TO "temporary_exposure_gap"`);
    await queryRunner.query(
      `CREATE TABLE "exposure_gap" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "areaId" text, "fromAt" integer NOT NULL, "untilAt" integer NOT NULL, "reason" text NOT NULL)`,
    );
    await queryRunner.query(
      `INSERT INTO "exposure_gap"("id", "siteId", "areaId", "fromAt", "untilAt", "reason") SELECT "id", "siteId", "areaId", "fromAt", "untilAt", "reason" FROM "temporary_exposure_gap"`,
    );
    await queryRunner.query(`DROP TABLE "temporary_exposure_gap"`);
    await queryRunner.query(`CREATE INDEX "IDX_9c4f1def192186b3c85eed5b1a" ON "exposure_gap" ("siteId") `);
    await queryRunner.query(`DROP INDEX "IDX_70df1b8d2b7e1ce4c34ec47c91"`);
    await queryRunner.query(`ALTER TABLE "census_area" RENAME TO "temporary_census_area"`);
    await queryRunner.query(
      `CREATE TABLE "census_area" ("censusId" text NOT NULL, "areaId" text NOT NULL, "takenAt" integer NOT NULL, "savedAt" integer NOT NULL, "present" integer NOT NULL, "waiting" integer NOT NULL, "boarding" integer NOT NULL, PRIMARY KEY ("censusId", "areaId"))`,
    );
    await queryRunner.query(
      `INSERT INTO "census_area"("censusId", "areaId", "takenAt", "savedAt", "present", "waiting", "boarding") SELECT "censusId", "areaId", "takenAt", "savedAt", "present", "waiting", "boarding" FROM "temporary_census_area"`,
    );
    await queryRunner.query(`DROP TABLE "temporary_census_area"`);
    await queryRunner.query(`CREATE INDEX "IDX_70df1b8d2b7e1ce4c34ec47c91" ON "census_area" ("areaId", "takenAt") `);
    await queryRunner.query(`DROP INDEX "IDX_1154e1d8d8e53acfe9bcc2ad8a"`);
    await queryRunner.query(`ALTER TABLE "census" RENAME TO "temporary_census"`);
    await queryRunner.query(
      `CREATE TABLE "census" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "takenAt" integer NOT NULL, "savedAt" integer NOT NULL, "enteredBy" text NOT NULL, "undecidedWaiting" integer, "ambulancesHolding" integer, "arrivalsSinceMidnight" integer)`,
    );
    await queryRunner.query(
      `INSERT INTO "census"("id", "siteId", "takenAt", "savedAt", "enteredBy", "undecidedWaiting", "ambulancesHolding", "arrivalsSinceMidnight") SELECT "id", "siteId", "takenAt", "savedAt", "enteredBy", "undecidedWaiting", "ambulancesHolding", "arrivalsSinceMidnight" FROM "temporary_census"`,
    );
    await queryRunner.query(`DROP TABLE "temporary_census"`);
    await queryRunner.query(`CREATE INDEX "IDX_1154e1d8d8e53acfe9bcc2ad8a" ON "census" ("siteId", "takenAt") `);
    await queryRunner.query(`DROP INDEX "IDX_6c67be036afc19b944db3ce6ca"`);
    await queryRunner.query(`DROP INDEX "IDX_5ffb6a0a4b9b7937a50eb627ca"`);
    await queryRunner.query(`ALTER TABLE "care_area" RENAME TO "temporary_care_area"`);
    await queryRunner.query(
      `CREATE TABLE "care_area" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "code" integer NOT NULL, "name" text NOT NULL, "position" integer NOT NULL, "spaceKind" text NOT NULL, "spaces" integer NOT NULL, "safeMinimum" integer NOT NULL, "bedStep" integer NOT NULL, "noticeHours" real NOT NULL, "alertLimit" real NOT NULL, "escalationNote" text NOT NULL)`,
    );
    await queryRunner.query(
      `INSERT INTO "care_area"("id", "siteId", "code", "name", "position", "spaceKind", "spaces", "safeMinimum", "bedStep", "noticeHours", "alertLimit", "escalationNote") SELECT "id", "siteId", "code", "name", "position", "spaceKind", "spaces", "safeMinimum", "bedStep", "noticeHours", "alertLimit", "escalationNote" FROM "temporary_care_area"`,
    );
    await queryRunner.query(`DROP TABLE "temporary_care_area"`);
    await queryRunner.query(`CREATE UNIQUE INDEX "IDX_6c67be036afc19b944db3ce6ca" ON "care_area" ("siteId", "code") `);
    await queryRunner.query(`CREATE UNIQUE INDEX "IDX_5ffb6a0a4b9b7937a50eb627ca" ON "care_area" ("siteId", "name") `);
    await queryRunner.query(`DROP INDEX "IDX_ac7c8681c6e1af48f6a0e5d25c"`);
    await queryRunner.query(`ALTER TABLE "calendar_entry" RENAME TO "temporary_calendar_entry"`);
    await queryRunner.query(
      `CREATE TABLE "calendar_entry" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "date" text NOT NULL, "kind" text NOT NULL, "name" text NOT NULL, "statedEffect" text)`,
    );
    await queryRunner.query(
      `INSERT INTO "calendar_entry"("id", "siteId", "date", "kind", "name", "statedEffect") SELECT "id", "siteId", "date", "kind", "name", "statedEffect" FROM "temporary_calendar_entry"`,
    );
    await queryRunner.query(`DROP TABLE "temporary_calendar_entry"`);
    await queryRunner.query(`CREATE INDEX "IDX_ac7c8681c6e1af48f6a0e5d25c" ON "calendar_entry" ("siteId", "date") `);
    await queryRunner.query(`DROP INDEX "IDX_da497c032f45dd417ad35677ff"`);
    await queryRunner.query(`ALTER TABLE "bed_change" RENAME TO "temporary_bed_change"`);
    await queryRunner.query(
      `CREATE TABLE "bed_change" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "areaId" text NOT NULL, "kind" text NOT NULL, "fromAt" integer NOT NULL, "untilAt" integer NOT NULL, "beds" integer NOT NULL, "blocked" integer NOT NULL, "reason" text NOT NULL, "madeBy" text NOT NULL, "madeAt" integer NOT NULL)`,
    );
    await queryRunner.query(
      `INSERT INTO "bed_change"("id", "siteId", "areaId", "kind", "fromAt", "untilAt", "beds", "blocked", "reason", "madeBy", "madeAt") SELECT "id", "siteId", "areaId", "kind", "fromAt", "untilAt", "beds", "blocked", "reason", "madeBy", "madeAt" FROM "temporary_bed_change"`,
    );
    await queryRunner.query(`DROP TABLE "temporary_bed_change"`);
    await queryRunner.query(`CREATE INDEX "IDX_da497c032f45dd417ad35677ff" ON "bed_change" ("siteId", "untilAt") `);
    await queryRunner.query(`DROP INDEX "IDX_807d529d04f4c5f525d0065cc8"`);
    await queryRunner.query(`ALTER TABLE "arrival_model" RENAME TO "temporary_arrival_model"`);
    await queryRunner.query(
      `CREATE TABLE "arrival_model" ("id" text PRIMARY KEY NOT NULL, "siteId" text NOT NULL, "status" text NOT NULL, "createdAt" integer NOT NULL, "fittedByPersonId" text NOT NULL, "fittedBy" text NOT NULL, "fittedAt" integer, "approvedBy" text, "approvedAt" integer, "retiredAt" integer, "reason" text, "error" text, "jobId" text, "refreshedFromId" text, "refreshedAt" integer, "engineVersion" text NOT NULL, "trainedFrom" integer, "trainedTo" integer, "visits" integer NOT NULL DEFAULT (0), "lineage" text NOT NULL DEFAULT ('[]'), "parameters" text, "detail" text)`,
    );
    await queryRunner.query(
      `INSERT INTO "arrival_model"("id", "siteId", "status", "createdAt", "fittedByPersonId", "fittedBy", "fittedAt", "approvedBy", "approvedAt", "retiredAt", "reason", "error", "jobId", "refreshedFromId", "refreshedAt", "engineVersion", "trainedFrom", "trainedTo", "visits", "lineage", "parameters", "detail") SELECT "id", "siteId", "status", "createdAt", "fittedByPersonId", "fittedBy", "fittedAt", "approvedBy", "approvedAt", "retiredAt", "reason", "error", "jobId", "refreshedFromId", "refreshedAt", "engineVersion", "trainedFrom", "trainedTo", "visits", "lineage", "parameters", "detail" FROM "temporary_arrival_model"`,
    );
    await queryRunner.query(`DROP TABLE "temporary_arrival_model"`);
    await queryRunner.query(`CREATE INDEX "IDX_807d529d04f4c5f525d0065cc8" ON "arrival_model" ("siteId", "status") `);
    await queryRunner.query(`DROP INDEX "IDX_1c41fd99e4a5027f71ca2c4ec6"`);
    await queryRunner.query(`DROP INDEX "IDX_556b8393b2302636cd04bc8c2c"`);
    await queryRunner.query(`DROP TABLE "visit_log"`);
    await queryRunner.query(`DROP TABLE "visit"`);
    await queryRunner.query(`DROP TABLE "staffed_bed_plan_area"`);
    await queryRunner.query(`DROP INDEX "IDX_39da626abc1a72559e71db964a"`);
    await queryRunner.query(`DROP TABLE "staffed_bed_plan"`);
    await queryRunner.query(`DROP TABLE "site"`);
    await queryRunner.query(`DROP INDEX "IDX_e2a11b51667ba2b28628d612a5"`);
    await queryRunner.query(`DROP TABLE "shift"`);
    await queryRunner.query(`DROP INDEX "IDX_5d97cf9773002b16861b4bb8ae"`);
    await queryRunner.query(`DROP TABLE "session"`);
    await queryRunner.query(`DROP INDEX "IDX_c35338eab525d35551692792ba"`);
    await queryRunner.query(`DROP INDEX "IDX_d2d717efd90709ebd3cb26b936"`);
    await queryRunner.query(`DROP TABLE "person"`);
    await queryRunner.query(`DROP INDEX "IDX_203c3a1fd830f833739498227b"`);
    await queryRunner.query(`DROP TABLE "outlook"`);
    await queryRunner.query(`DROP INDEX "IDX_27596f83abf11927b07021ea2c"`);
    await queryRunner.query(`DROP TABLE "membership"`);
    await queryRunner.query(`DROP INDEX "IDX_0c5b24eac4a0b8249da1e1142a"`);
    await queryRunner.query(`DROP INDEX "IDX_4593c6cf6b29b8b284663b97a2"`);
    await queryRunner.query(`DROP TABLE "job"`);
    await queryRunner.query(`DROP TABLE "health_group"`);
    await queryRunner.query(`DROP INDEX "IDX_9c4f1def192186b3c85eed5b1a"`);
    await queryRunner.query(`DROP TABLE "exposure_gap"`);
    await queryRunner.query(`DROP INDEX "IDX_70df1b8d2b7e1ce4c34ec47c91"`);
    await queryRunner.query(`DROP TABLE "census_area"`);
    await queryRunner.query(`DROP INDEX "IDX_1154e1d8d8e53acfe9bcc2ad8a"`);
    await queryRunner.query(`DROP TABLE "census"`);
    await queryRunner.query(`DROP INDEX "IDX_6c67be036afc19b944db3ce6ca"`);
    await queryRunner.query(`DROP INDEX "IDX_5ffb6a0a4b9b7937a50eb627ca"`);
    await queryRunner.query(`DROP TABLE "care_area"`);
    await queryRunner.query(`DROP INDEX "IDX_ac7c8681c6e1af48f6a0e5d25c"`);
    await queryRunner.query(`DROP TABLE "calendar_entry"`);
    await queryRunner.query(`DROP INDEX "IDX_da497c032f45dd417ad35677ff"`);
    await queryRunner.query(`DROP TABLE "bed_change"`);
    await queryRunner.query(`DROP INDEX "IDX_5b195f20fa8e4e617b547ed907"`);
    await queryRunner.query(`DROP TABLE "audit_event"`);
    await queryRunner.query(`DROP INDEX "IDX_807d529d04f4c5f525d0065cc8"`);
    await queryRunner.query(`DROP TABLE "arrival_model"`);
  }
}
