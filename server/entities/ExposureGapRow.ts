import { Column, Entity, Index, PrimaryColumn, JoinColumn, ManyToOne, type Relation } from 'typeorm';
import type { CareArea } from './CareArea.ts';
import type { Site } from './Site.ts';

/** An outage or a diversion: a span that is taken out of exposure. */
@Entity({ name: 'exposure_gap' })
export class ExposureGapRow {
  @PrimaryColumn('text') id: string;
  @Index() @Column('text') siteId: string;

  @ManyToOne('Site', { nullable: false })
  @JoinColumn({ name: 'siteId' })
  site: Relation<Site>;

  /** Null: every area. */
  @Column('text', { nullable: true }) areaId: string | null;

  @ManyToOne('CareArea', { nullable: true })
  @JoinColumn({ name: 'areaId' })
  area: Relation<CareArea | null>;

  @Column('integer') fromAt: number;
  @Column('integer') untilAt: number;
  @Column('text') reason: string;
  @Column('text', { default: 'outage' }) kind: 'outage' | 'diversion';
  /** Who declared it; null if it came with the installation. */
  @Column('text', { nullable: true }) declaredBy: string | null;
  @Column('integer', { nullable: true }) declaredAt: number | null;
}
