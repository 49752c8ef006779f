import { Column, Entity, Index, JoinColumn, ManyToOne, PrimaryColumn, type Relation } from 'typeorm';
import type { Person } from './Person.ts';
import type { Site } from './Site.ts';

/** Somebody whom a site's brief goes to. Who is removed or unsubscribes stays on record, so that old deliveries keep their name. */
@Entity({ name: 'brief_recipient' })
@Index(['siteId', 'address'], { unique: true })
export class BriefRecipient {
  @PrimaryColumn('text') id: string;
  @Column('text') siteId: string;

  @ManyToOne('Site', { nullable: false })
  @JoinColumn({ name: 'siteId' })
  site: Relation<Site>;

  /** Null: an outside address. */
  @Column('text', { nullable: true }) personId: string | null;

  @ManyToOne('Person', { nullable: true })
  @JoinColumn({ name: 'personId' })
  person: Relation<Person | null>;

  @Column('text') name: string;
  @Column('text') address: string;
  @Column('text') addedBy: string;
  @Column('integer') addedAt: number;
  /** An outside address gets nothing but this question until it has confirmed. */
  @Column('integer', { nullable: true }) askedAt: number | null;
  @Column('integer', { nullable: true }) confirmedAt: number | null;
  @Column('integer', { nullable: true }) unsubscribedAt: number | null;
  @Column('integer', { nullable: true }) removedAt: number | null;
  /** When mail to the address came back for good: it gets nothing until somebody confirms it. */
  @Column('integer', { nullable: true }) returnedAt: number | null;
}
