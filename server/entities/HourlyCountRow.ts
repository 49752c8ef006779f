import { Column, Entity, Index, JoinColumn, ManyToOne, PrimaryColumn } from 'typeorm';
import type { Relation } from 'typeorm';
import type { VisitLog } from './VisitLog.ts';

/** Arrivals (and departures) of one care area within one local hour, as a log of hourly counts gives them. */
@Entity({ name: 'hourly_count', withoutRowid: true })
@Index('hourly_count_hour', ['logNumber', 'localHour'])
export class HourlyCountRow {
  @PrimaryColumn('integer')
  logNumber: number;

  @ManyToOne('VisitLog', { onDelete: 'RESTRICT', nullable: false })
  @JoinColumn({ name: 'logNumber', referencedColumnName: 'number' })
  log: Relation<VisitLog>;

  /** Place among the log's counts, by area and hour. */
  @PrimaryColumn('integer')
  rowNumber: number;

  /** CareArea.code, unique in the site. */
  @Column('integer')
  areaCode: number;

  /** Local hours from 1970-01-01 00:00 on the site's wall clock; the hour that comes twice in autumn is one. */
  @Column('integer')
  localHour: number;

  @Column('integer')
  arrivals: number;

  /** Null where the log gives none for the area. */
  @Column('integer', { nullable: true })
  departures: number | null;
}
