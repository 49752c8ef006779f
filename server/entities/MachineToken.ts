import { Column, Entity, Index, JoinColumn, ManyToOne, PrimaryColumn, type Relation } from 'typeorm';
import type { TokenPurpose } from '../../shared/domain/token-purpose.ts';
import type { Site } from './Site.ts';

/** Lets a site's own system send one kind of data. The secret itself is never stored. */
@Entity({ name: 'machine_token' })
export class MachineToken {
  @PrimaryColumn('text') id: string;
  @Index() @Column('text') siteId: string;

  @ManyToOne('Site', { nullable: false })
  @JoinColumn({ name: 'siteId' })
  site: Relation<Site>;

  @Column('text') purpose: TokenPurpose;
  @Column('text') name: string;
  /** SHA-256 of the secret, hexadecimal. The secret has 256 random bits, so a salt would add nothing. */
  @Column('text', { unique: true }) secretHash: string;
  @Column('text') createdBy: string;
  @Column('integer') createdAt: number;
  /** To the minute. */
  @Column('integer', { nullable: true }) lastUsedAt: number | null;
  @Column('integer', { nullable: true }) revokedAt: number | null;
}
