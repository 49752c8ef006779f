import { Column, Entity, Index, PrimaryGeneratedColumn } from 'typeorm';

/** Who did what, when, from where. Rows are only ever added. */
@Entity({ name: 'audit_event' })
@Index(['siteId', 'at'])
export class AuditEvent {
  @PrimaryGeneratedColumn('increment', { type: 'integer' }) id: number;
  @Column('integer') at: number;
  @Column('text', { nullable: true }) personId: string | null;
  /** The person's name, or the part of the server that acted by itself. */
  @Column('text') actor: string;
  @Column('text', { nullable: true }) siteId: string | null;
  /** For instance visit-log.uploaded. */
  @Column('text') event: string;
  /** Id of the record concerned. */
  @Column('text') subject: string;
  /** JSON, without any note's text that could identify someone. */
  @Column('text') detail: string;
  @Column('text', { nullable: true }) address: string | null;
  @Column('text', { nullable: true }) requestId: string | null;
}
