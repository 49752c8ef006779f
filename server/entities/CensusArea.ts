import { Column, Entity, Index, PrimaryColumn, JoinColumn, ManyToOne, type Relation } from 'typeorm';
import type { CareArea } from './CareArea.ts';
import type { Census } from './Census.ts';

/** The count of one area in a census. `siteId` and `takenAt` repeat the census, so that the newest count is one look-up. */
@Entity({ name: 'census_area' })
@Index(['areaId', 'takenAt'])
export class CensusArea {
  @PrimaryColumn('text') censusId: string;

  @ManyToOne('Census', { nullable: false })
  @JoinColumn({ name: 'censusId' })
  census: Relation<Census>;

  @PrimaryColumn('text') areaId: string;

  @ManyToOne('CareArea', { nullable: false })
  @JoinColumn({ name: 'areaId' })
  area: Relation<CareArea>;

  @Column('integer') takenAt: number;
  @Column('integer') savedAt: number;
  @Column('integer') present: number;
  @Column('integer') waiting: number;
  @Column('integer') boarding: number;
}
