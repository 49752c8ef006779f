import { Column, Entity, Index, PrimaryColumn, JoinColumn, ManyToOne, type Relation } from 'typeorm';
import type { CareArea } from './CareArea.ts';
import type { Site } from './Site.ts';

/** Staffed beds that differ from the plan between two instants: a dated exception, or a change made now. */
@Entity({ name: 'bed_change' })
@Index(['siteId', 'untilAt'])
export class BedChange {
  @PrimaryColumn('text') id: string;
  @Column('text') siteId: string;

  @ManyToOne('Site', { nullable: false })
  @JoinColumn({ name: 'siteId' })
  site: Relation<Site>;

  @Column('text') areaId: string;

  @ManyToOne('CareArea', { nullable: false })
  @JoinColumn({ name: 'areaId' })
  area: Relation<CareArea>;

  @Column('text') kind: 'dated exception' | 'change now';
  @Column('integer') fromAt: number;
  @Column('integer') untilAt: number;
  /** Staffed beds in force, blocked bed spaces already taken off. */
  @Column('integer') beds: number;
  @Column('integer') blocked: number;
  @Column('text') reason: string;
  @Column('text') madeBy: string;
  @Column('integer') madeAt: number;
}
