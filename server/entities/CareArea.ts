import { Column, Entity, Index, JoinColumn, ManyToOne, PrimaryColumn, type Relation } from 'typeorm';
import type { Site } from './Site.ts';

/** A care area of a site and its physical and policy limits. */
@Entity({ name: 'care_area' })
@Index(['siteId', 'code'], { unique: true })
@Index(['siteId', 'name'], { unique: true })
export class CareArea {
  @PrimaryColumn('text') id: string;
  @Column('text') siteId: string;
  @ManyToOne('Site', { nullable: false })
  @JoinColumn({ name: 'siteId' })
  site: Relation<Site>;
  /** Small number stored with each visit; never reused within a site. */
  @Column('integer') code: number;
  @Column('text') name: string;
  /** Place in the site's own order. */
  @Column('integer') position: number;
  @Column('text') spaceKind: 'bed' | 'chair';
  @Column('integer') spaces: number;
  @Column('integer') safeMinimum: number;
  @Column('integer') bedStep: number;
  @Column('real') noticeHours: number;
  /** The chance of shortfall past which Tonight speaks up, 0..1. */
  @Column('real') alertLimit: number;
  @Column('text') escalationNote: string;
  /** Staffed beds that one nurse looks after, by the site's own rule; null: not stated, and never guessed. */
  @Column('real', { nullable: true }) bedsPerNurse: number | null;
  /** Ids of the areas that may be lent staffed beds of this one. */
  @Column('simple-json', { default: '[]' }) lendsTo: string[];
}
