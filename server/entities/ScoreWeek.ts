import { Column, Entity, PrimaryColumn } from 'typeorm';

/** Sums of one week's scores of one kind, so that the page need not add up every score. Made anew whenever a score of the week changes. */
@Entity({ name: 'score_week', withoutRowid: true })
export class ScoreWeek {
  @PrimaryColumn('text') siteId: string;
  @PrimaryColumn('integer') week: number;
  @PrimaryColumn('text') measure: 'need' | 'peak' | 'arrivals' | 'shift arrivals';
  @PrimaryColumn('integer') leadHours: number;
  @PrimaryColumn('text') areaId: string;
  @PrimaryColumn('text') shift: string;
  @PrimaryColumn('text') modelId: string;
  @PrimaryColumn('integer') acknowledged: number;
  /** JSON of ScoreSums. */
  @Column('text') sums: string;
}
