import { In, IsNull, Not, type EntityManager } from 'typeorm';
import { z } from 'zod';
import type { Dependencies } from '../../dependencies.ts';
import { Brief } from '../../entities/Brief.ts';
import { BriefDelivery, type DeliveryState } from '../../entities/BriefDelivery.ts';
import { recordOwnAudit } from '../../http/audit.ts';
import { PermanentJobError, RetryJobError, type JobContext, type JobKind } from '../../jobs/queue.ts';
import { LineError, openMailLine, type MailLine } from '../../mail/mail-line.ts';
import { unsubscribeMark } from './brief-section.ts';
import { whyLeftOut } from './brief-recipients.ts';
import { signLink } from './signed-link.ts';

const longestPauseSeconds = 600;

const payloadSchema = z.object({ briefId: z.string(), deliveryId: z.string().nullable() });

/**
 * Sends what waits of a brief, one recipient after another over one connection, in order. Before the dot that ends a message
 * the delivery is stored as being handed over, and after the mail server's answer as sent: whatever stops the server in
 * between leaves it not known whether the mail server took the message. Such a one is not sent again by itself: the dot was
 * on its way, so that the mail server has most probably taken it. Where the mail server itself breaks off after the dot,
 * RFC 5321 (4.2.5, 6.1) leaves the message with the sender: it is sent again, under the same Message-ID.
 */
export function makeSendKind(deps: Dependencies): JobKind {
  return {
    async run(context) {
      const { briefId, deliveryId } = payloadSchema.parse(context.payload);
      const brief = await deps.database.read
        .createQueryBuilder(Brief, 'brief')
        .addSelect(['brief.html', 'brief.text', 'brief.attachments'])
        .where('brief.id = :briefId', { briefId })
        .getOne();
      if (!brief) throw new PermanentJobError('The brief was removed before it was sent.');
      const scope = { briefId, ...(deliveryId === null ? { recipientId: Not(IsNull()) } : { id: deliveryId }) };
      await settleInterrupted(deps, scope);
      await sendAll(deps, context, brief, scope);
    },
    async settle(manager, job, error) {
      const { briefId, deliveryId } = payloadSchema.parse(JSON.parse(job.payload));
      const scope = { briefId, ...(deliveryId === null ? { recipientId: Not(IsNull()) } : { id: deliveryId }) };
      await manager.update(
        BriefDelivery,
        { ...scope, state: 'waiting' },
        { state: 'given up', lastAnswer: error.slice(0, 300) },
      );
      if (deliveryId === null) {
        await manager.update(Brief, { id: briefId, state: 'sending' }, { state: 'sent', sentAt: deps.clock() });
      }
      await recordOwnAudit(manager, {
        at: deps.clock(),
        actor: 'the mailer',
        siteId: job.siteId,
        event: 'brief.given-up',
        subject: briefId,
        detail: { attempts: job.attempts, error },
      });
    },
  };
}

type Scope = { briefId: string; id?: string };

/** What was being handed over when the server was stopped. */
async function settleInterrupted({ database }: Dependencies, scope: Scope): Promise<void> {
  await database.write((manager) =>
    manager.update(
      BriefDelivery,
      { ...scope, state: 'handing over' },
      {
        state: 'not known',
        lastAnswer:
          'The server was stopped between the end of this message and the mail server’s answer. It has most probably arrived; sent again, it carries the same Message-ID.',
      },
    ),
  );
}

async function sendAll(deps: Dependencies, context: JobContext, brief: Brief, scope: Scope): Promise<void> {
  const { database, config } = deps;
  const { job, signal, progress } = context;
  const total = await database.read.countBy(BriefDelivery, scope);
  let after = -1;
  let line: MailLine | null = null;
  let busy: string | null = null;
  let handed = 0;
  // A mail server that took something is there: it is asked again soon.
  const pause = () => (handed > 0 ? 15 : Math.min(longestPauseSeconds, 15 * 4 ** Math.min(6, job.attempts - 1)));
  try {
    for (;;) {
      if (signal.aborted) throw new Error('stopped');
      const next = await database.read
        .createQueryBuilder(BriefDelivery, 'delivery')
        .where({ ...scope, state: 'waiting' })
        .andWhere('delivery.position > :after', { after })
        .orderBy('delivery.position', 'ASC')
        .limit(1)
        .getOne();
      if (!next) break;
      after = next.position;
      progress(next.position / Math.max(1, total), `${String(next.position)} of ${String(total)}`);
      const out = await leaveOut(deps, brief, next);
      if (out) continue;
      try {
        line ??= await openMailLine(config);
        await handOver(deps, line, brief, next);
        handed += 1;
      } catch (error) {
        line = null;
        if (error instanceof LeftOut) continue;
        if (!(error instanceof LineError)) throw error;
        await note(deps, next, error.fault === 'refused' ? 'refused' : 'waiting', error.message);
        if (error.fault === 'later' || error.fault === 'unanswered') throw new RetryJobError(error.message, pause());
        if (error.fault === 'busy') busy = error.message;
      }
    }
  } finally {
    line?.close();
  }
  if (busy !== null) throw new RetryJobError(busy, pause());
  await finish(deps, brief, scope);
}

/** The recipient left between the start of a message and its end. */
class LeftOut extends Error {}

async function handOver(deps: Dependencies, line: MailLine, brief: Brief, delivery: BriefDelivery): Promise<void> {
  const { database, clock, config } = deps;
  const unsubscribeUrl =
    delivery.recipientId === null
      ? null
      : `${config.baseUrl}/mail/unsubscribe/${signLink(config.sessionSecret, 'unsubscribe', delivery.recipientId, brief.composedAt)}`;
  const own = unsubscribeUrl ?? `${config.baseUrl}/sites/${encodeURIComponent(brief.siteId)}/briefs`;
  const answer = await line.send(
    {
      id: delivery.messageId,
      to: delivery.address,
      subject: delivery.recipientId === null ? `Test: ${brief.subject}`.slice(0, 250) : brief.subject,
      text: brief.text.replaceAll(unsubscribeMark, own),
      html: brief.html.replaceAll(unsubscribeMark, own),
      pictures: JSON.parse(brief.attachments) as { cid: string; contentType: string; content: string }[],
      unsubscribeUrl,
    },
    () =>
      database
        .write(async (manager) => {
          // Asked again where nobody else writes: whoever was removed a moment ago gets nothing.
          const why = await reasonToLeaveOut(manager, deps, brief, delivery);
          if (why !== null) {
            await manager.update(BriefDelivery, { id: delivery.id }, { state: 'left out', lastAnswer: why });
            return why;
          }
          const attempt = { state: 'handing over' as const, attempts: delivery.attempts + 1, attemptedAt: clock() };
          await manager.update(BriefDelivery, { id: delivery.id }, attempt);
          return null;
        })
        .then((why) => {
          if (why !== null) throw new LeftOut(why);
        }),
  );
  await database.write((manager) =>
    manager.update(BriefDelivery, { id: delivery.id }, { state: 'sent', sentAt: clock(), lastAnswer: answer }),
  );
}

function reasonToLeaveOut(
  manager: EntityManager,
  { clock }: Dependencies,
  brief: Brief,
  { recipientId }: BriefDelivery,
): Promise<string | null> {
  return recipientId === null ? Promise.resolve(null) : whyLeftOut(manager, recipientId, brief.siteIds, clock());
}

/** Passes a recipient over who is none any more, before anything is said to the mail server. */
async function leaveOut(deps: Dependencies, brief: Brief, delivery: BriefDelivery): Promise<boolean> {
  const why = await reasonToLeaveOut(deps.database.read, deps, brief, delivery);
  if (why !== null) await note(deps, delivery, 'left out', why);
  return why !== null;
}

async function note(
  { database, clock }: Dependencies,
  delivery: BriefDelivery,
  state: DeliveryState,
  lastAnswer: string,
): Promise<void> {
  const tried = state === 'left out' ? {} : { attempts: delivery.attempts + 1, attemptedAt: clock() };
  await database.write((manager) =>
    manager.update(BriefDelivery, { id: delivery.id }, { state, lastAnswer, ...tried }),
  );
}

/** The brief is sent once nothing of it waits; looked at and written in one transaction, so that nothing slips between. */
async function finish(deps: Dependencies, brief: Brief, scope: Scope): Promise<void> {
  if (scope.id !== undefined) return;
  const { database, clock } = deps;
  await database.write(async (manager) => {
    const waiting = await manager.countBy(BriefDelivery, { ...scope, state: In(['waiting', 'handing over']) });
    if (waiting > 0) throw new RetryJobError('More was to be sent meanwhile.', 1);
    await manager.update(Brief, { id: brief.id, state: 'sending' }, { state: 'sent', sentAt: clock() });
    const sent = await manager.countBy(BriefDelivery, { ...scope, state: 'sent' });
    await recordOwnAudit(manager, {
      at: clock(),
      actor: 'the mailer',
      siteId: brief.siteId,
      event: 'brief.sent',
      subject: brief.id,
      detail: { sent },
    });
  });
}
