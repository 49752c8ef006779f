import { formatNumber } from '../../lib/format.ts';

/** "91.2 %"; a dash where nothing is known. Under half a per cent never prints as nothing. */
export function percent(share: number | null, decimals = 1): string {
  if (share === null) return '–';
  if (share > 0 && share < 0.005) return '<1\u00a0%';
  if (share < 1 && share >= 0.995) return '>99\u00a0%';
  return `${formatNumber(100 * share, decimals)}\u00a0%`;
}

/** A figure with decimals; a dash where nothing is known. */
export function figure(value: number | null, decimals = 2): string {
  return value === null ? '–' : formatNumber(value, decimals);
}
