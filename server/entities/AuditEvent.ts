import { Column, Entity, Index, PrimaryGeneratedColumn } from 'typeorm';

/**
 * Who did what, when, from where. Rows are only ever added: triggers refuse any change, and each row
 * carries the digest of the one before, so that a removed or altered row shows.
 */
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
  /** Salted digest of the note that was typed with it; the text stands in audit_note. */
  @Column('text', { nullable: true }) noteHash: string | null;
  /** `hash` of the row before; zeros for the first. */
  @Column('text', { default: '' }) previousHash: string;
  /** SHA-256 over everything above. */
  @Column('text', { default: '' }) hash: string;
}
