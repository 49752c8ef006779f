import { Column, Entity, Index, PrimaryColumn, JoinColumn, ManyToOne, type Relation } from 'typeorm';
import type { Site } from './Site.ts';

/** A day of a site that is not an ordinary one: the site's own event or closure. Public holidays come from the country's calendar. */
@Entity({ name: 'calendar_entry' })
@Index(['siteId', 'date'])
export class CalendarEntry {
  @PrimaryColumn('text') id: string;
  @Column('text') siteId: string;

  @ManyToOne('Site', { nullable: false })
  @JoinColumn({ name: 'siteId' })
  site: Relation<Site>;

  /** Local date YYYY-MM-DD. */
  @Column('text') date: string;
  @Column('text') kind: 'local event' | 'closure';
  @Column('text') name: string;
  /** Stated effect on arrivals as a range of factors; null lets past days of the same name speak. */
  @Column('simple-json', { nullable: true }) statedEffect: [number, number] | null;
}
