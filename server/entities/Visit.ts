import { Column, Entity, Index, JoinColumn, ManyToOne, PrimaryColumn } from 'typeorm';
import type { Relation } from 'typeorm';
import type { VisitLog } from './VisitLog.ts';

/** One visit. Instants are UTC seconds; null means not recorded. Never leaves the server as a row. */
@Entity({ name: 'visit', withoutRowid: true })
@Index('visit_arrival', ['logNumber', 'arrivalAt'])
export class Visit {
  @PrimaryColumn('integer')
  logNumber: number;

  @ManyToOne('VisitLog', { onDelete: 'RESTRICT', nullable: false })
  @JoinColumn({ name: 'logNumber', referencedColumnName: 'number' })
  log: Relation<VisitLog>;

  /** Line of the file's records, 1 for the first after the header. */
  @PrimaryColumn('integer')
  rowNumber: number;

  /** CareArea.code, unique in the site. */
  @Column('integer')
  areaCode: number;

  @Column('integer')
  arrivalAt: number;

  @Column('integer', { nullable: true })
  bedSpaceAt: number | null;

  @Column('integer', { nullable: true })
  admissionDecisionAt: number | null;

  @Column('integer', { nullable: true })
  departureAt: number | null;

  /** Code of shared/domain/disposition. */
  @Column('integer', { nullable: true })
  disposition: number | null;

  /** 1 by ambulance, 0 not. */
  @Column('integer', { nullable: true })
  byAmbulance: number | null;
}
