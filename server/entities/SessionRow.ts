import { Column, Entity, Index, PrimaryColumn } from 'typeorm';

/** A signed-in browser. */
@Entity({ name: 'session' })
export class SessionRow {
  @PrimaryColumn('text') sid: string;
  @Index() @Column('integer') expiresAt: number;
  @Column('text') data: string;
}
