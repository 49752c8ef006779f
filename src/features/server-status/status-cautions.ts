import type { ServerStatus } from '../../../shared/api/server-status.ts';
import { formatAge, formatCount } from '../../lib/format.ts';
import { formatBytes } from './format-bytes.ts';

const lowShare = 0.1;
const lowBytes = 2e9;
const waitsTooLongSeconds = 600;

/** What an administrator has to see to, most urgent first; empty where nothing is. */
export function statusCautions({ now, disk, queue, backups, mail }: ServerStatus): string[] {
  const cautions: string[] = [];
  if (disk.freeBytes < lowBytes || disk.freeBytes < lowShare * disk.totalBytes) {
    cautions.push(
      `Only ${formatBytes(disk.freeBytes)} free on the disk. When it is full nothing can be saved, census included: make room.`,
    );
  }
  const newest = backups.files.at(0);
  if (!newest) cautions.push('There is no backup yet.');
  else if (backups.everyHours > 0 && newest.madeAt < now - 2 * backups.everyHours * 3600) {
    cautions.push(
      `The newest backup is ${formatAge(now - newest.madeAt)} old; one is due every ${formatCount(backups.everyHours, 'hour')}.`,
    );
  }
  if (queue.oldestWaitsSince !== null && queue.oldestWaitsSince < now - waitsTooLongSeconds) {
    cautions.push(`Background work has waited for ${formatAge(now - queue.oldestWaitsSince)}.`);
  }
  if (queue.failed.length > 0) cautions.push(`${formatCount(queue.failed.length, 'job')} failed within 30 days.`);
  if (!mail.set) cautions.push('No mail server is set (SMTP_URL): alerts, briefs and invitations are not sent.');
  else if (mail.lastFailure && mail.lastFailure.at > (mail.lastSentAt ?? 0)) {
    cautions.push(`The last message was not sent: ${mail.lastFailure.error}`);
  }
  return cautions;
}
