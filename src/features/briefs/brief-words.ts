import type { Recipient } from '../../../shared/api/brief-recipients.ts';
import type { Brief, BriefTally, Delivery } from '../../../shared/api/briefs.ts';
import { formatCount, formatDateTime } from '../../lib/format.ts';

/** What became of a brief, in a few words. */
export function sayBriefState(brief: Brief & { tally: BriefTally }, timeZone: string): string {
  const { state, tally, sentAt } = brief;
  if (state === 'draft') return 'Draft, not sent';
  if (state === 'awaiting approval') return 'Waits for approval';
  const faults = [
    ...(tally.refused > 0 ? [`${formatCount(tally.refused, 'delivery', 'deliveries')} failed`] : []),
    ...(tally.notKnown > 0 ? [`${String(tally.notKnown)} not known`] : []),
    ...(tally.returned > 0 ? [`${String(tally.returned)} came back`] : []),
    ...(tally.leftOut > 0 ? [`${String(tally.leftOut)} left out`] : []),
  ];
  const to = formatCount(tally.sent, 'recipient');
  const head =
    state === 'sending'
      ? `Being sent: ${to} so far, ${String(tally.waiting)} to go`
      : `Sent to ${to}${sentAt === null ? '' : `, ${formatDateTime(sentAt, timeZone)}`}`;
  return [head, ...faults].join('; ');
}

export const deliveryWords: Record<Delivery['state'], string> = {
  waiting: 'Waits',
  'handing over': 'Being handed over',
  sent: 'Sent',
  refused: 'Refused',
  'left out': 'Left out',
  'given up': 'Given up',
  'not known': 'Not known whether it arrived',
};

/** States after which a person may ask for another attempt. */
export const mayBeSentAgain: readonly Delivery['state'][] = ['refused', 'given up', 'not known'];

export function sayRecipientState(
  { state, confirmedAt, askedAt, unsubscribedAt, returnedAt, kind }: Recipient,
  timeZone: string,
): string {
  if (state === 'unsubscribed' && unsubscribedAt !== null)
    return `Unsubscribed ${formatDateTime(unsubscribedAt, timeZone)}`;
  if (state === 'asked' && askedAt !== null) return `Asked ${formatDateTime(askedAt, timeZone)}, not confirmed yet`;
  if (state === 'returned' && returnedAt !== null)
    return `Mail to it came back ${formatDateTime(returnedAt, timeZone)}: it gets nothing until somebody confirms the address`;
  if (kind === 'person') return 'Receives it; person of the site';
  return confirmedAt === null ? 'Receives it' : `Receives it; confirmed ${formatDateTime(confirmedAt, timeZone)}`;
}
