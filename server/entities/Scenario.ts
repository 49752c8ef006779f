import { Column, Entity, Index, JoinColumn, ManyToOne, PrimaryColumn, type Relation } from 'typeorm';
import type { PlanChange } from '../../shared/domain/plan-change.ts';
import type { ArrivalModelRow } from './ArrivalModelRow.ts';
import type { Site } from './Site.ts';

/** A saved plan to be tried against as is, with all that its comparison is computed from. */
@Entity({ name: 'scenario' })
@Index(['siteId', 'savedAt'])
export class Scenario {
  @PrimaryColumn('text') id: string;
  @Column('text') siteId: string;

  @ManyToOne('Site', { nullable: false })
  @JoinColumn({ name: 'siteId' })
  site: Relation<Site>;

  @Column('text') name: string;
  @Column('text') state: 'saved' | 'confirming' | 'confirmed' | 'failed' | 'cancelled' | 'withdrawn';
  @Column('simple-json') changes: PlanChange[];
  @Column('integer') savedAt: number;
  @Column('text') savedBy: string;
  @Column('text') savedByPersonId: string;

  @Column('text') modelId: string;

  @ManyToOne('ArrivalModelRow', { nullable: false })
  @JoinColumn({ name: 'modelId' })
  model: Relation<ArrivalModelRow>;

  /** Version of the staffed-bed plan that was in force. */
  @Column('integer') planVersion: number;
  @Column('integer') seed: number;
  @Column('integer') replications: number;
  @Column('text') engineVersion: string;
  @Column('text') softwareVersion: string;
  /** SHA-256 of `input`; plans with the same can stand side by side. */
  @Column('text') basisDigest: string;
  @Column('integer') basisIssuedAt: number;
  /** JSON of the engine's OutlookInput that the plan was saved on. Never changed. */
  @Column('text', { select: false }) input: string;
  @Column('text', { nullable: true }) jobId: string | null;
  @Column('text', { nullable: true }) error: string | null;
  @Column('integer', { nullable: true }) confirmedAt: number | null;
  /** JSON of the engine's ScenarioResult. */
  @Column('text', { nullable: true, select: false }) result: string | null;
  /** SHA-256 of `result`. */
  @Column('text', { nullable: true }) resultDigest: string | null;
  @Column('integer', { nullable: true }) adoptedAt: number | null;
  @Column('text', { nullable: true }) adoptedBy: string | null;
  @Column('text', { nullable: true }) adoptedAs: 'these dates' | 'every week' | null;
}
