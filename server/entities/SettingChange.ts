import { Column, Entity, Index, PrimaryColumn, JoinColumn, ManyToOne, type Relation } from 'typeorm';
import type { SettingSection } from '../../shared/domain/site-settings.ts';
import type { Site } from './Site.ts';

/** One setting of a site that somebody changed, in the words that the history shows. Rows are only ever added. */
@Entity({ name: 'setting_change' })
@Index(['siteId', 'at'])
export class SettingChange {
  @PrimaryColumn('text') id: string;
  @Column('text') siteId: string;

  @ManyToOne('Site', { nullable: false })
  @JoinColumn({ name: 'siteId' })
  site: Relation<Site>;

  @Column('integer') at: number;
  @Column('text') madeBy: string;
  @Column('text') section: SettingSection;
  /** The area, shift or calendar day that it belongs to; null: the site itself. */
  @Column('text', { nullable: true }) subject: string | null;
  /** For instance "Alert limit". */
  @Column('text') setting: string;
  /** Null: it was not there, or not stated. */
  @Column('text', { nullable: true }) before: string | null;
  @Column('text', { nullable: true }) after: string | null;
}
