import { Column, Entity, Index, PrimaryColumn, JoinColumn, ManyToOne, type Relation } from 'typeorm';
import type { Site } from './Site.ts';

/** A fitted model of arrivals and length of stay. Its parameters never change once it is fitted. */
@Entity({ name: 'arrival_model' })
@Index(['siteId', 'status'])
export class ArrivalModelRow {
  @PrimaryColumn('text') id: string;
  @Column('text') siteId: string;

  @ManyToOne('Site', { nullable: false })
  @JoinColumn({ name: 'siteId' })
  site: Relation<Site>;

  @Column('text') status: 'fitting' | 'candidate' | 'in use' | 'retired' | 'failed';
  @Column('integer') createdAt: number;
  @Column('text') fittedByPersonId: string;
  @Column('text') fittedBy: string;
  @Column('integer', { nullable: true }) fittedAt: number | null;
  @Column('text', { nullable: true }) approvedBy: string | null;
  @Column('integer', { nullable: true }) approvedAt: number | null;
  @Column('integer', { nullable: true }) retiredAt: number | null;
  @Column('text', { nullable: true }) reason: string | null;
  @Column('text', { nullable: true }) error: string | null;
  @Column('text', { nullable: true }) jobId: string | null;
  /** The same approved model before its level was moved on by newer visits; structure and approval are its own. */
  @Column('text', { nullable: true }) refreshedFromId: string | null;
  @Column('integer', { nullable: true }) refreshedAt: number | null;
  /** When the track record first fell outside what chance explains; null while it has not. Carried on as its level moves. */
  @Column('integer', { nullable: true }) driftFoundAt: number | null;
  /** JSON: what the watch found, in words and figures; null until there is enough to watch. */
  @Column('text', { nullable: true }) drift: string | null;
  @Column('text') engineVersion: string;
  @Column('integer', { nullable: true }) trainedFrom: number | null;
  @Column('integer', { nullable: true }) trainedTo: number | null;
  @Column('integer', { default: 0 }) visits: number;
  /** Where its stays come from; null means visits, or a model that is not fitted. */
  @Column('text', { nullable: true }) staysFrom: 'departures by hour' | 'stated mean' | null;
  /** JSON: the logs it was fitted on. */
  @Column('text', { default: '[]' }) lineage: string;
  /** JSON: arrival model, stay model, calendar; as the engine made it. Null until fitted. */
  @Column('text', { nullable: true, select: false }) parameters: string | null;
  /** JSON: what the pages show of it. Null until fitted. */
  @Column('text', { nullable: true, select: false }) detail: string | null;
}
