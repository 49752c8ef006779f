import { Column, Entity, Index, JoinColumn, OneToOne, PrimaryColumn, type Relation } from 'typeorm';
import type { OutlookRow } from './OutlookRow.ts';

/** The distributions behind an outlook that the track record scores: kept as they were issued; only how far they are scored changes. */
@Entity({ name: 'outlook_laws' })
@Index(['siteId', 'issuedAt'])
@Index(['siteId', 'state', 'issuedAt'])
export class OutlookLawsRow {
  @PrimaryColumn('text') outlookId: string;

  @OneToOne('OutlookRow', { nullable: false })
  @JoinColumn({ name: 'outlookId' })
  outlook: Relation<OutlookRow>;

  @Column('text') siteId: string;
  @Column('integer') issuedAt: number;
  /** JSON of the engine's IssuedLaw[]. */
  @Column('text', { select: false }) laws: string;
  /**
   * Waiting: some of what it said is not known yet. Withdrawn: the log that told was taken back. Not recorded: an outage lay
   * over it. Overtaken: another one took its place before anything that it would have been scored on began.
   */
  @Column('text', { default: 'waiting' }) state: 'waiting' | 'scored' | 'withdrawn' | 'not recorded' | 'overtaken';
}
