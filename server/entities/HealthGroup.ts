import { Column, Entity, PrimaryColumn } from 'typeorm';

/** A health group: several sites under one management. */
@Entity({ name: 'health_group' })
export class HealthGroup {
  @PrimaryColumn('text') id: string;
  @Column('text') name: string;
}
