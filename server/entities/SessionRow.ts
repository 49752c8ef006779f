import { Column, Entity, Index, PrimaryColumn } from 'typeorm';

/** A signed-in browser. */
@Entity({ name: 'session' })
export class SessionRow {
  @PrimaryColumn('text') sid: string;
  @Index() @Column('integer') expiresAt: number;
  @Column('text') data: string;
  /** Whose it is once signed in, so that all sessions of a person can be ended. */
  @Index() @Column('text', { nullable: true }) personId: string | null;
}
