import { Column, Entity, Index, JoinColumn, ManyToOne, PrimaryColumn, type Relation } from 'typeorm';
import type { Site } from './Site.ts';

/** A weekly brief exactly as it was sent, or as it will be. Its content never changes once it is composed. */
@Entity({ name: 'brief' })
@Index(['siteId', 'scheduledFor'], { unique: true })
@Index(['siteId', 'composedAt'])
export class Brief {
  @PrimaryColumn('text') id: string;
  @Column('text') siteId: string;

  @ManyToOne('Site', { nullable: false })
  @JoinColumn({ name: 'siteId' })
  site: Relation<Site>;

  /** Every site that it has a section of. */
  @Column('simple-json') siteIds: string[];
  @Column('text') state: 'draft' | 'awaiting approval' | 'sending' | 'sent';
  /** The due time that it answers; null: somebody composed it. */
  @Column('integer', { nullable: true }) scheduledFor: number | null;
  @Column('integer') composedAt: number;
  @Column('text') composedBy: string;
  @Column('text', { nullable: true }) approvedBy: string | null;
  @Column('integer', { nullable: true }) approvedAt: number | null;
  @Column('integer', { nullable: true }) sentAt: number | null;
  @Column('text') subject: string;
  /** The parts of the message; in place of each recipient's own address to unsubscribe they hold `unsubscribeMark`. */
  @Column('text', { select: false }) html: string;
  @Column('text', { select: false }) text: string;
  /** JSON: pictures by Content-ID, base64. */
  @Column('text', { select: false }) attachments: string;
}
