import { IsNull, Not } from 'typeorm';
import type { Dependencies } from '../../dependencies.ts';
import { BriefDelivery } from '../../entities/BriefDelivery.ts';
import { BriefRecipient } from '../../entities/BriefRecipient.ts';
import { recordOwnAudit } from '../../http/audit.ts';
import { readDeliveryReport } from './read-delivery-report.ts';

export type ReportOutcome = 'returned for good' | 'returned for now' | 'delayed' | 'none of ours';

/**
 * Notes beside the delivery that its message came back. If for good, its address gets no brief of any site until
 * somebody there confirms it.
 */
export async function takeDeliveryReport(deps: Dependencies, raw: Buffer): Promise<ReportOutcome> {
  const report = await readDeliveryReport(raw);
  if (!report) return 'none of ours';
  const forGood = report.action === 'failed' && report.status.startsWith('5');
  const because = [report.status, report.said].filter((part) => part !== '').join(': ');
  const at = deps.clock();
  return deps.database.write(async (manager): Promise<ReportOutcome> => {
    const delivery = await manager.findOne(BriefDelivery, {
      where: { messageId: report.messageId },
      relations: { brief: true },
    });
    if (!delivery) return 'none of ours';
    if (report.action === 'delayed') return 'delayed';
    // A report that comes twice, or once more for a copy, changes nothing.
    if (delivery.returnedAt === null) {
      await manager.update(BriefDelivery, { id: delivery.id }, { returnedAt: at, returnedBecause: because });
      if (forGood && delivery.recipientId !== null) {
        const { address } = delivery;
        await manager.update(
          BriefRecipient,
          { address, confirmedAt: Not(IsNull()), returnedAt: IsNull() },
          { returnedAt: at },
        );
      }
      await recordOwnAudit(manager, {
        at,
        actor: 'the mailer',
        siteId: delivery.brief.siteId,
        event: 'brief.returned',
        subject: delivery.briefId,
        detail: { deliveryId: delivery.id, status: report.status, forGood },
      });
    }
    return forGood ? 'returned for good' : 'returned for now';
  });
}
