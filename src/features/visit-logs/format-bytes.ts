import { formatNumber } from '../../lib/format.ts';

/** A size in the unit that shows it: "640 bytes", "38 kB", "1.4 MB", "212 MB". */
export function formatBytes(bytes: number): string {
  if (bytes < 1000) return `${formatNumber(bytes)} bytes`;
  if (bytes < 999_500) return `${formatNumber(bytes / 1000)} kB`;
  return `${formatNumber(bytes / 1e6, bytes < 9.95e6 ? 1 : 0)} MB`;
}
