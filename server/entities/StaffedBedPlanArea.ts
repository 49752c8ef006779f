import { Column, Entity, PrimaryColumn, JoinColumn, ManyToOne, type Relation } from 'typeorm';
import type { CareArea } from './CareArea.ts';
import type { StaffedBedPlan } from './StaffedBedPlan.ts';

/** Staffed beds of one area in a plan, by half hour of week. */
@Entity({ name: 'staffed_bed_plan_area' })
export class StaffedBedPlanArea {
  @PrimaryColumn('text') planId: string;

  @ManyToOne('StaffedBedPlan', { nullable: false })
  @JoinColumn({ name: 'planId' })
  plan: Relation<StaffedBedPlan>;

  @PrimaryColumn('text') areaId: string;

  @ManyToOne('CareArea', { nullable: false })
  @JoinColumn({ name: 'areaId' })
  area: Relation<CareArea>;

  /** 336 whole numbers, Monday 00:00 first, local time. */
  @Column('simple-json') halfHours: number[];
}
