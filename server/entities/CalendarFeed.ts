import { Column, Entity, Index, JoinColumn, ManyToOne, PrimaryColumn, type Relation } from 'typeorm';
import type { Site } from './Site.ts';

/** Lets a calendar program read a site's shifts past the limit at a secret address. The secret itself is never stored. */
@Entity({ name: 'calendar_feed' })
export class CalendarFeed {
  @PrimaryColumn('text') id: string;
  @Index() @Column('text') siteId: string;

  @ManyToOne('Site', { nullable: false })
  @JoinColumn({ name: 'siteId' })
  site: Relation<Site>;

  @Column('text') name: string;
  /** SHA-256 of the secret, hexadecimal. The secret has 256 random bits, so a salt would add nothing. */
  @Column('text', { unique: true }) secretHash: string;
  @Column('text') createdBy: string;
  @Column('integer') createdAt: number;
  /** To the minute. */
  @Column('integer', { nullable: true }) lastReadAt: number | null;
  @Column('integer', { nullable: true }) revokedAt: number | null;
}
