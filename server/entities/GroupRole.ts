import { Column, Entity, Index, JoinColumn, ManyToOne, PrimaryColumn, type Relation } from 'typeorm';
import type { Role } from '../../shared/domain/permission.ts';
import type { HealthGroup } from './HealthGroup.ts';
import type { Site } from './Site.ts';

/**
 * A role for everybody whom the identity provider puts into a group of that name: at a site, over a health
 * group, or for the installation (both null).
 */
@Entity({ name: 'group_role' })
export class GroupRole {
  @PrimaryColumn('text') id: string;
  /** As the provider's groups claim spells it. */
  @Index() @Column('text') claim: string;
  @Column('text') role: Role;
  @Column('text', { nullable: true }) siteId: string | null;

  @ManyToOne('Site', { nullable: true })
  @JoinColumn({ name: 'siteId' })
  site: Relation<Site | null>;

  @Column('text', { nullable: true }) groupId: string | null;

  @ManyToOne('HealthGroup', { nullable: true })
  @JoinColumn({ name: 'groupId' })
  group: Relation<HealthGroup | null>;

  @Column('text') createdBy: string;
  @Column('integer') createdAt: number;
}
