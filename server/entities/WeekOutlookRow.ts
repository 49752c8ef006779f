import { Column, Entity, Index, JoinColumn, ManyToOne, PrimaryColumn, type Relation } from 'typeorm';
import type { ArrivalModelRow } from './ArrivalModelRow.ts';
import type { Site } from './Site.ts';

/** An issued forecast of the days ahead with all that it was computed from. Never changed, never deleted. */
@Entity({ name: 'week_outlook' })
@Index(['siteId', 'issuedAt'])
export class WeekOutlookRow {
  @PrimaryColumn('text') id: string;
  @Column('text') siteId: string;

  @ManyToOne('Site', { nullable: false })
  @JoinColumn({ name: 'siteId' })
  site: Relation<Site>;

  @Column('integer') issuedAt: number;
  @Column('text') trigger: string;
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
  @Column('real') computeMilliseconds: number;
  /** SHA-256 of what the outlook stands on, census and time apart: another one now means that it is out of date. */
  @Column('text') standsOn: string;
  /** JSON of the calendar days it was computed with. */
  @Column('text') calendar: string;
  /** JSON of the engine's WeekOutlookInput, exactly as it was handed over. */
  @Column('text', { select: false }) input: string;
  /** JSON of the engine's WeekOutlookResult. */
  @Column('text', { select: false }) result: string;
  /** SHA-256 of `result`. */
  @Column('text') digest: string;
}
