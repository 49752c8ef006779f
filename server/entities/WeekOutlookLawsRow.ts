import { Column, Entity, Index, JoinColumn, OneToOne, PrimaryColumn, type Relation } from 'typeorm';
import type { OutlookLawsRow } from './OutlookLawsRow.ts';
import type { WeekOutlookRow } from './WeekOutlookRow.ts';

/** The distributions behind a week outlook that the track record scores: kept as they were issued; only how far they are scored changes. */
@Entity({ name: 'week_outlook_laws' })
@Index(['siteId', 'issuedAt'])
@Index(['siteId', 'state', 'issuedAt'])
export class WeekOutlookLawsRow {
  @PrimaryColumn('text') weekOutlookId: string;

  @OneToOne('WeekOutlookRow', { nullable: false })
  @JoinColumn({ name: 'weekOutlookId' })
  weekOutlook: Relation<WeekOutlookRow>;

  @Column('text') siteId: string;
  @Column('integer') issuedAt: number;
  /** JSON of the engine's IssuedLaw[]. */
  @Column('text', { select: false }) laws: string;
  /** As of an outlook of tonight; "overtaken" is one that was not issued by the clock, which is no fair sample. */
  @Column('text', { default: 'waiting' }) state: OutlookLawsRow['state'];
}
