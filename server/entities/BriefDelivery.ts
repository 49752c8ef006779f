import { Column, Entity, Index, JoinColumn, ManyToOne, PrimaryColumn, type Relation } from 'typeorm';
import type { Brief } from './Brief.ts';
import type { BriefRecipient } from './BriefRecipient.ts';

/**
 * - waiting: not handed over yet;
 * - handing over: stored just before the dot that ends the message; found at a start, the server was stopped in between;
 * - sent: the mail server took it;
 * - refused: the mail server will not take it;
 * - left out: no recipient any more when its turn came;
 * - given up: the mail server did not take it in all the time that was tried;
 * - not known: the server was stopped between the end of the message and the mail server's answer.
 */
export type DeliveryState = 'waiting' | 'handing over' | 'sent' | 'refused' | 'left out' | 'given up' | 'not known';

/** One brief to one recipient. */
@Entity({ name: 'brief_delivery' })
@Index(['briefId', 'position'])
export class BriefDelivery {
  @PrimaryColumn('text') id: string;
  @Column('text') briefId: string;

  @ManyToOne('Brief', { nullable: false, onDelete: 'CASCADE' })
  @JoinColumn({ name: 'briefId' })
  brief: Relation<Brief>;

  /** Null: a test sent to whoever asked for it. */
  @Column('text', { nullable: true }) recipientId: string | null;

  @ManyToOne('BriefRecipient', { nullable: true })
  @JoinColumn({ name: 'recipientId' })
  recipient: Relation<BriefRecipient | null>;

  @Column('integer') position: number;
  @Column('text') name: string;
  @Column('text') address: string;
  /** The part before the @ of the Message-ID, fixed before the first attempt. */
  @Column('text', { unique: true }) messageId: string;
  @Column('text') state: DeliveryState;
  @Column('integer') attempts: number;
  @Column('integer', { nullable: true }) attemptedAt: number | null;
  @Column('integer', { nullable: true }) sentAt: number | null;
  /** What the mail server said last, without addresses; or why it was left out. */
  @Column('text', { nullable: true }) lastAnswer: string | null;
  /** When a report came that the message, once taken, could not be delivered. */
  @Column('integer', { nullable: true }) returnedAt: number | null;
  /** The report's status code and what it says, without addresses. */
  @Column('text', { nullable: true }) returnedBecause: string | null;
}
