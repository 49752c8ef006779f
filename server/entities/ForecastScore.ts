import { Column, Entity, Index, PrimaryGeneratedColumn, JoinColumn, ManyToOne, type Relation } from 'typeorm';
import type { OutlookRow } from './OutlookRow.ts';
import type { WeekOutlookRow } from './WeekOutlookRow.ts';

/** One thing that an outlook said, scored against what a log then told. Deleted when that log is withdrawn. */
@Entity({ name: 'forecast_score' })
@Index(['siteId', 'week'])
@Index(['siteId', 'measure', 'leadHours', 'areaId', 'fromAt'])
export class ForecastScore {
  @PrimaryGeneratedColumn() id: number;
  @Column('text') siteId: string;
  /** The outlook of tonight that said it; null where a week outlook did. */
  @Index()
  @Column('text', { nullable: true })
  outlookId: string | null;

  @ManyToOne('OutlookRow', { nullable: true })
  @JoinColumn({ name: 'outlookId' })
  outlook: Relation<OutlookRow | null>;

  @Index()
  @Column('text', { nullable: true })
  weekOutlookId: string | null;

  @ManyToOne('WeekOutlookRow', { nullable: true })
  @JoinColumn({ name: 'weekOutlookId' })
  weekOutlook: Relation<WeekOutlookRow | null>;

  /** The model as it was approved: a level that moved on since counts as the same model. */
  @Column('text') modelId: string;
  /** Empty for the whole department, so that it can stand in a key. */
  @Column('text') areaId: string;
  @Column('text') measure: 'need' | 'peak' | 'arrivals' | 'shift arrivals';
  /** Hours ahead; 0 for the last outlook before a shift or day. What a week outlook said is grouped, see record-lead. */
  @Column('integer') leadHours: number;
  /** The shift in charge at the hour, or the shift itself; empty where none is. */
  @Column('text') shift: string;
  @Column('integer') fromAt: number;
  @Column('integer') toAt: number;
  /** Local week, Monday to Sunday: days since 1970-01-01 of its Monday, over 7. */
  @Column('integer') week: number;
  @Column('integer') acknowledged: number;
  @Column('integer') recomputed: number;
  @Column('integer') observed: number;
  /** Null where the whole law is not known. */
  @Column('real', { nullable: true }) logScore: number | null;
  @Column('real', { nullable: true }) absoluteError: number | null;
  /** |y − y of the same hour a week before|. */
  @Column('real', { nullable: true }) naiveError: number | null;
  /** JSON of pinball losses at the scored levels. */
  @Column('text', { nullable: true }) pinball: string | null;
  /** JSON of the intervals: [low, high, mass] by level. */
  @Column('text', { nullable: true }) intervals: string | null;
  @Column('real', { nullable: true }) median: number | null;
  @Column('real', { nullable: true }) pitLower: number | null;
  @Column('real', { nullable: true }) pitUpper: number | null;
  /** Randomised PIT, drawn with a seed of the outlook's. */
  @Column('real', { nullable: true }) pit: number | null;
  /** Mean pinball loss that a forecast exactly right would have had by chance. */
  @Column('real', { nullable: true }) floorPinball: number | null;
  @Column('real', { nullable: true }) floorError: number | null;
  /** JSON of the baselines' mean pinball losses and absolute errors, by name; null where the log does not reach back. */
  @Column('text', { nullable: true }) baselines: string | null;
  @Column('real', { nullable: true }) chance: number | null;
  @Column('integer', { nullable: true }) short: number | null;
}
