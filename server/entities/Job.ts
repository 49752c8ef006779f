import { Column, Entity, Index, PrimaryColumn, JoinColumn, ManyToOne, type Relation } from 'typeorm';
import type { Site } from './Site.ts';

/** Background work, one row a piece. A lease that has run out means that its process died. */
@Entity({ name: 'job' })
@Index(['status', 'runAfter'])
@Index(['siteId', 'createdAt'])
export class Job {
  @PrimaryColumn('text') id: string;
  @Column('text') kind: string;
  @Column('text') title: string;
  @Column('text', { nullable: true }) siteId: string | null;

  @ManyToOne('Site', { nullable: true })
  @JoinColumn({ name: 'siteId' })
  site: Relation<Site | null>;

  @Column('text') payload: string;
  @Column('text') status: 'queued' | 'running' | 'done' | 'failed' | 'cancelled';
  @Column('integer') attempts: number;
  @Column('integer') maxAttempts: number;
  @Column('integer') runAfter: number;
  @Column('integer', { nullable: true }) leaseUntil: number | null;
  @Column('real') progress: number;
  @Column('text') progressText: string;
  @Column('text', { nullable: true }) error: string | null;
  @Column('text') createdBy: string;
  @Column('integer') createdAt: number;
  @Column('integer', { nullable: true }) startedAt: number | null;
  @Column('integer', { nullable: true }) endedAt: number | null;
}
