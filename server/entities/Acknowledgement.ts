import { Column, Entity, Index, JoinColumn, ManyToOne, PrimaryColumn, type Relation } from 'typeorm';
import type { CareArea } from './CareArea.ts';
import type { OutlookRow } from './OutlookRow.ts';
import type { Site } from './Site.ts';

/** Somebody saw that an area passes its limit and said what was done. Rows are only ever added. */
@Entity({ name: 'acknowledgement' })
@Index(['siteId', 'at'])
export class Acknowledgement {
  @PrimaryColumn('text') id: string;
  @Column('text') siteId: string;

  @ManyToOne('Site', { nullable: false })
  @JoinColumn({ name: 'siteId' })
  site: Relation<Site>;

  @Column('text') areaId: string;

  @ManyToOne('CareArea', { nullable: false })
  @JoinColumn({ name: 'areaId' })
  area: Relation<CareArea>;

  /** What was looked at. */
  @Column('text') outlookId: string;

  @ManyToOne('OutlookRow', { nullable: false })
  @JoinColumn({ name: 'outlookId' })
  outlook: Relation<OutlookRow>;

  /** The first and the last hour past the limit that it speaks of. */
  @Column('integer') fromAt: number;
  @Column('integer') untilAt: number;
  /** JSON of every hour past the limit that it speaks of; between the first and the last some may lie under it. */
  @Column('text') hours: string;
  /** Screened for what could identify a patient. */
  @Column('text') note: string;
  @Column('text') by: string;
  @Column('integer') at: number;
}
