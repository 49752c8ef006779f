import { Column, Entity, Index, PrimaryColumn, JoinColumn, ManyToOne, type Relation } from 'typeorm';
import type { Site } from './Site.ts';

/** A shift of a site, in minutes of the local day; one that ends before it starts ends on the next day. */
@Entity({ name: 'shift' })
export class Shift {
  @PrimaryColumn('text') id: string;
  @Index() @Column('text') siteId: string;

  @ManyToOne('Site', { nullable: false })
  @JoinColumn({ name: 'siteId' })
  site: Relation<Site>;

  @Column('text') name: string;
  @Column('integer') startMinute: number;
  @Column('integer') endMinute: number;
  /** Hours before its start until which staff can still be booked for it; null: not stated. */
  @Column('integer', { nullable: true }) leadTimeHours: number | null;
}
