import { Column, Entity, JoinColumn, OneToOne, PrimaryColumn, type Relation } from 'typeorm';
import type { Site } from './Site.ts';

/** When and how a site's weekly brief goes out. A site without a row has none scheduled. */
@Entity({ name: 'brief_settings' })
export class BriefSettings {
  @PrimaryColumn('text') siteId: string;

  @OneToOne('Site', { nullable: false })
  @JoinColumn({ name: 'siteId' })
  site: Relation<Site>;

  @Column('boolean') scheduled: boolean;
  /** ISO: 1 Monday .. 7 Sunday, in the site's zone. */
  @Column('integer') weekday: number;
  @Column('integer') minuteOfDay: number;
  /** A brief waits until somebody approves it. */
  @Column('boolean') approveFirst: boolean;
  /** The site alone, or a section for each site of its health group. */
  @Column('text') covers: 'site' | 'group';
  /** The last due time that was answered by a brief, or that had passed when the schedule was set. */
  @Column('integer') lastDueAt: number;
}
