import { Column, Entity, Index, PrimaryColumn } from 'typeorm';

/** Somebody who signed in, or whom an administrator named by address before. Known by (issuer, subject). */
@Entity({ name: 'person' })
@Index(['issuer', 'subject'], { unique: true })
export class Person {
  @PrimaryColumn('text') id: string;
  /** Null until the first sign-in of a person named by address. */
  @Column('text', { nullable: true }) issuer: string | null;
  @Column('text', { nullable: true }) subject: string | null;
  @Column('text') name: string;
  /** Lower case. */
  @Index() @Column('text') email: string;
  /** 1 if the provider had verified the address at the last sign-in; only then does it prove who the person is. */
  @Column('integer', { default: 0 }) emailVerified: number;
  /** JSON: the groups that the provider put the person into at the last sign-in. */
  @Column('text', { default: '[]' }) identityGroups: string;
  @Column('integer') createdAt: number;
  @Column('integer', { nullable: true }) lastSignInAt: number | null;
}
