import { formatNumber } from '../../lib/format.ts';

/** "12 MB", "1.4 GB": powers of ten, as disks are sold. */
export function formatBytes(bytes: number): string {
  const units = ['B', 'kB', 'MB', 'GB', 'TB'];
  let value = bytes;
  let unit = 0;
  while (value >= 1000 && unit < units.length - 1) {
    value /= 1000;
    unit += 1;
  }
  return `${formatNumber(value, unit > 1 && value < 10 ? 1 : 0)} ${units[unit]}`;
}
