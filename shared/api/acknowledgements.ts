import { z } from 'zod';
import { defineContract } from './contract.ts';
import { id, instant, note, siteParams } from './common.ts';

/** Somebody saw that an area passes its limit at some hours, and said what was done. Never changed, only added to. */
export const acknowledgement = z.object({
  id,
  areaId: id,
  /** The outlook that was looked at. */
  outlookId: id,
  /** The first and the last hour past the limit that it speaks of. */
  fromAt: instant,
  untilAt: instant,
  /** Every hour past the limit that it speaks of, ascending. */
  hours: z.array(instant),
  note: z.string(),
  by: z.string(),
  at: instant,
});
export type Acknowledgement = z.infer<typeof acknowledgement>;

export const acknowledgeBody = z.object({
  areaId: id,
  outlookId: id,
  note: note.min(3, 'Say what was done, without patient details'),
});
export type AcknowledgeBody = z.infer<typeof acknowledgeBody>;

export const acknowledgeRisk = defineContract({
  id: 'acknowledgeRisk',
  method: 'post',
  path: '/api/sites/:siteId/acknowledgements',
  access: 'risk:acknowledge',
  summary:
    'Acknowledge that an area passes its limit tonight, with a note of what was done. It speaks of the hours that are past the limit in the outlook named; an hour that passes it later asks again.',
  params: siteParams,
  body: acknowledgeBody,
  status: 201,
  reply: acknowledgement,
});
