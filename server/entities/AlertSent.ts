import { Column, Entity, Index, JoinColumn, ManyToOne, PrimaryColumn, type Relation } from 'typeorm';
import type { CareArea } from './CareArea.ts';
import type { OutlookRow } from './OutlookRow.ts';
import type { Site } from './Site.ts';

/** An alert that went to the on-call address for one area; the newest of an area decides when the next may go. */
@Entity({ name: 'alert_sent' })
@Index(['siteId', 'areaId', 'sentAt'])
export class AlertSent {
  @PrimaryColumn('text') id: string;
  @Column('text') siteId: string;

  @ManyToOne('Site', { nullable: false })
  @JoinColumn({ name: 'siteId' })
  site: Relation<Site>;

  @Column('text') areaId: string;

  @ManyToOne('CareArea', { nullable: false })
  @JoinColumn({ name: 'areaId' })
  area: Relation<CareArea>;

  @Column('text') outlookId: string;

  @ManyToOne('OutlookRow', { nullable: false })
  @JoinColumn({ name: 'outlookId' })
  outlook: Relation<OutlookRow>;

  /** When the outlook was issued, UTC seconds. */
  @Column('integer') sentAt: number;
  /** Start of the shift in charge then; null where the site has none. */
  @Column('integer', { nullable: true }) shiftFrom: number | null;
  /** The area's highest chance of shortfall in that shift and the next, and the limit that it passed, 0..1. */
  @Column('real') chance: number;
  @Column('real') alertLimit: number;
  /** When an outlook first showed the chance well below the limit again. */
  @Column('integer', { nullable: true }) rearmedAt: number | null;
  /** The job that sends it. */
  @Column('text') jobId: string;
}
