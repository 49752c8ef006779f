import { Column, Entity, Index, PrimaryColumn, JoinColumn, ManyToOne, type Relation } from 'typeorm';
import type { Site } from './Site.ts';

/** One version of a site's staffed-bed plan. The newest version is in force; none is ever changed. */
@Entity({ name: 'staffed_bed_plan' })
@Index(['siteId', 'version'], { unique: true })
export class StaffedBedPlan {
  @PrimaryColumn('text') id: string;
  @Column('text') siteId: string;

  @ManyToOne('Site', { nullable: false })
  @JoinColumn({ name: 'siteId' })
  site: Relation<Site>;

  @Column('integer') version: number;
  @Column('integer') savedAt: number;
  @Column('text') savedBy: string;
  @Column('text') reason: string;
}
