import { Column, Entity, Index, JoinColumn, ManyToOne, PrimaryColumn } from 'typeorm';
import type { Relation } from 'typeorm';
import type { ArrivalMeaning, AreaMeaning } from '../../shared/domain/extract-meaning.ts';
import type { Site } from './Site.ts';

/** Mean length of stay by care area, hours, and where the figures are from. */
export interface StatedStays {
  source: string;
  areas: { areaCode: number; meanHours: number }[];
}

/** One accepted file of visits. Its rows count only while it is ready; rules of precedence stand in database/read-visits. */
@Entity({ name: 'visit_log' })
@Index(['siteId', 'uploadedAt'])
@Index(['siteId', 'sha256'], { unique: true, where: `"status" IN ('loading', 'ready')` })
export class VisitLog {
  @PrimaryColumn('text')
  id: string;

  /** What its rows are: one a visit, or one an hour and care area. */
  @Column('text', { default: 'visits' })
  kind: 'visits' | 'hourly counts';

  /** Small number that its visits carry instead of the id: a million rows repeat it. */
  @Column('integer', { unique: true })
  number: number;

  @Column('text')
  siteId: string;

  @ManyToOne('Site', { onDelete: 'RESTRICT', nullable: false })
  @JoinColumn({ name: 'siteId' })
  site: Relation<Site>;

  @Column('text')
  status: 'loading' | 'ready' | 'withdrawn' | 'failed' | 'purged';

  /** As the steward's computer calls it, screened. */
  @Column('text')
  fileName: string;

  /** Of the file as it was received, hexadecimal; recognises a repeat. */
  @Column('text')
  sha256: string;

  /** Rows accepted. */
  @Column('integer')
  rows: number;

  /** Arrivals of the log lie in [periodFrom, periodTo), UTC seconds, whole local days. */
  @Column('integer')
  periodFrom: number;

  @Column('integer')
  periodTo: number;

  /** Where the period began when it was accepted, if visits from its start were deleted after the retention time. */
  @Column('integer', { nullable: true })
  statedFrom: number | null;

  @Column('text')
  selectedBy: 'arrived' | 'departed';

  /** When the extract was taken, UTC seconds. */
  @Column('integer')
  takenAt: number;

  @Column('text')
  missingDeparture: 'still present' | 'unknown';

  /** What the arrival time marks; null if nobody was asked. */
  @Column('text', { nullable: true })
  arrivalMeaning: ArrivalMeaning | null;

  /** Which of a visit's areas its care area is; null if nobody was asked. */
  @Column('text', { nullable: true })
  areaMeaning: AreaMeaning | null;

  /** Rows left out, and by kind of problem (a row may have several): counts only, never a row. */
  @Column('simple-json')
  problems: { rows: number; kinds: { kind: string; rows: number }[] };

  /** Accepted rows by care area: the area's code and how many. */
  @Column('simple-json')
  visitsByArea: { areaCode: number; visits: number }[];

  /** Of hourly counts: mean stays that the site states, with their source. */
  @Column('simple-json', { nullable: true })
  statedStays: StatedStays | null;

  @Column('text')
  uploadedBy: string;

  @Column('integer')
  uploadedAt: number;

  @Column('integer', { nullable: true })
  readyAt: number | null;

  @Column('text', { nullable: true })
  withdrawnBy: string | null;

  @Column('integer', { nullable: true })
  withdrawnAt: number | null;

  /** Why it was withdrawn, or why loading failed. */
  @Column('text', { nullable: true })
  reason: string | null;

  /** The job that loads it, for its progress. */
  @Column('text', { nullable: true })
  jobId: string | null;
}
