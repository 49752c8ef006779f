import { Column, Entity, Index, JoinColumn, ManyToOne, PrimaryColumn, type Relation } from 'typeorm';
import type { ArrivalModelRow } from './ArrivalModelRow.ts';

/** A backtest of a candidate beside the model in use at the time. One that is done never changes. */
@Entity({ name: 'model_comparison' })
@Index(['candidateId', 'createdAt'])
export class ModelComparisonRow {
  @PrimaryColumn('text') id: string;
  @Column('text') siteId: string;
  @Column('text') candidateId: string;

  @ManyToOne('ArrivalModelRow', { nullable: false })
  @JoinColumn({ name: 'candidateId' })
  candidate: Relation<ArrivalModelRow>;

  @Column('text') inUseId: string;

  @ManyToOne('ArrivalModelRow', { nullable: false })
  @JoinColumn({ name: 'inUseId' })
  inUse: Relation<ArrivalModelRow>;

  @Column('text') status: 'running' | 'done' | 'failed';
  @Column('integer') createdAt: number;
  @Column('text') askedBy: string;
  @Column('text') jobId: string;
  @Column('integer', { nullable: true }) doneAt: number | null;
  @Column('text', { nullable: true }) error: string | null;
  @Column('integer') seed: number;
  @Column('text') engineVersion: string;
  /** JSON of the engine's ModelComparison; null until it is done. */
  @Column('text', { nullable: true }) result: string | null;
}
