import { Column, Entity, Index, PrimaryColumn, JoinColumn, ManyToOne, type Relation } from 'typeorm';
import type { Site } from './Site.ts';

/** One entry of a census, counts only. Entries are never changed; the newest count of each area counts. */
@Entity({ name: 'census' })
@Index(['siteId', 'takenAt'])
export class Census {
  @PrimaryColumn('text') id: string;
  @Column('text') siteId: string;

  @ManyToOne('Site', { nullable: false })
  @JoinColumn({ name: 'siteId' })
  site: Relation<Site>;

  @Column('integer') takenAt: number;
  @Column('integer') savedAt: number;
  @Column('text') enteredBy: string;
  @Column('integer', { nullable: true }) undecidedWaiting: number | null;
  @Column('integer', { nullable: true }) ambulancesHolding: number | null;
  @Column('integer', { nullable: true }) arrivalsSinceMidnight: number | null;
}
