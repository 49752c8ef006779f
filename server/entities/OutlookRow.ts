import { Column, Entity, Index, PrimaryColumn, JoinColumn, ManyToOne, type Relation } from 'typeorm';
import type { ArrivalModelRow } from './ArrivalModelRow.ts';
import type { Site } from './Site.ts';

/** An issued forecast with all that it was computed from. Never changed, never deleted. */
@Entity({ name: 'outlook' })
@Index(['siteId', 'issuedAt'])
export class OutlookRow {
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

  @Column('integer') seed: number;
  @Column('integer') replications: number;
  @Column('text') engineVersion: string;
  @Column('text') softwareVersion: string;
  @Column('real') computeMilliseconds: number;
  /** JSON of the engine's OutlookInput, exactly as it was handed over. */
  @Column('text', { select: false }) input: string;
  /** JSON of the engine's OutlookResult. */
  @Column('text', { select: false }) result: string;
  /** SHA-256 of `result`. */
  @Column('text') digest: string;
}
