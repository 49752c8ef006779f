import { Column, Entity, JoinColumn, ManyToOne, PrimaryColumn, type Relation } from 'typeorm';
import type { HealthGroup } from './HealthGroup.ts';

/** One emergency department. All its local times are in its own zone. */
@Entity({ name: 'site' })
export class Site {
  @PrimaryColumn('text') id: string;
  @Column('text') groupId: string;
  @ManyToOne('HealthGroup', { nullable: false })
  @JoinColumn({ name: 'groupId' })
  group: Relation<HealthGroup>;
  @Column('text') name: string;
  /** IANA name. */
  @Column('text') timeZone: string;
  /** ISO 3166-1 alpha-2, for public holidays. */
  @Column('text') country: string;
  @Column('text', { nullable: true }) region: string | null;
  /** The risk that staffed beds are planned to, 0..1. */
  @Column('real') planningRisk: number;
  /** Stays longer than this are cut (censored) here, hours. */
  @Column('integer', { default: 72 }) stayCapHours: number;
  /** Visits are deleted so many days after the arrival. */
  @Column('integer', { default: 1095 }) visitRetentionDays: number;
  /** Past counts below this are suppressed in exports and briefs. */
  @Column('integer', { default: 5 }) smallNumberMinimum: number;
  /** Where alert mail goes; null: none is sent. */
  @Column('text', { nullable: true }) onCallAddress: string | null;
  /** Minutes of the local day at which the site meets over its beds, ascending; empty: it has no such meeting. */
  @Column('simple-json', { default: '[600,960]' }) bedMeetingMinutes: number[];
  /** A wait for a bed space longer than this is too long by the site's own rule, minutes; null: not stated. */
  @Column('integer', { nullable: true }) waitLimitMinutes: number | null;
}
