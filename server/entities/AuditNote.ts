import { Column, Entity, PrimaryColumn } from 'typeorm';

/** The text that somebody typed with an audited action. It can be taken out; the chain's digest of it stays. */
@Entity({ name: 'audit_note' })
export class AuditNote {
  /** Id of the audit event. */
  @PrimaryColumn('integer') eventId: number;
  /** Random, so that a short text cannot be guessed from its digest. Taken out with the text. */
  @Column('text', { nullable: true }) salt: string | null;
  @Column('text', { nullable: true }) text: string | null;
  @Column('integer', { nullable: true }) redactedAt: number | null;
  @Column('text', { nullable: true }) redactedBy: string | null;
}
