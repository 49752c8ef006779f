import { Column, Entity, Index, PrimaryColumn, JoinColumn, ManyToOne, type Relation } from 'typeorm';
import type { HealthGroup } from './HealthGroup.ts';
import type { Person } from './Person.ts';
import type { Site } from './Site.ts';
import type { Role } from '../../shared/domain/permission.ts';

/**
 * A role that a person holds: at a site, over a health group (executive), or for the installation
 * (administrator: both null).
 */
@Entity({ name: 'membership' })
export class Membership {
  @PrimaryColumn('text') id: string;
  @Index() @Column('text') personId: string;

  @ManyToOne('Person', { nullable: false })
  @JoinColumn({ name: 'personId' })
  person: Relation<Person>;

  @Column('text') role: Role;
  @Column('text', { nullable: true }) siteId: string | null;

  @ManyToOne('Site', { nullable: true })
  @JoinColumn({ name: 'siteId' })
  site: Relation<Site | null>;

  @Column('text', { nullable: true }) groupId: string | null;

  @ManyToOne('HealthGroup', { nullable: true })
  @JoinColumn({ name: 'groupId' })
  group: Relation<HealthGroup | null>;

  /** The role ends then; null: no end. */
  @Column('integer', { nullable: true }) endsAt: number | null;
  @Column('integer') createdAt: number;
}
