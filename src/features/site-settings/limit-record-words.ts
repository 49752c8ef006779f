import type { LimitNight, LimitRecord } from '../../../shared/forecasting/limit-record.ts';
import { recordOfLimit } from '../../../shared/forecasting/limit-record.ts';
import { formatCount, formatNumber } from '../../lib/format.ts';

/** "This limit would have warned on 9 nights; 6 ran short, 1 of them without a warning." */
export function limitRecordInWords(nights: readonly LimitNight[], limit: number): string {
  const record: LimitRecord = recordOfLimit(nights, limit);
  const { judged, warned, ranShort, missed, unneeded } = record;
  if (nights.length === 0) return 'Last 8 weeks: no night has passed yet.';
  if (judged === 0) {
    return 'Last 8 weeks: no night can be judged yet. That takes an outlook from the evening, and a census or log for every hour of the night.';
  }
  const span =
    judged === nights.length
      ? `Last 8 weeks, ${formatCount(judged, 'night')}`
      : `Last 8 weeks, ${formatNumber(judged)} of ${formatCount(nights.length, 'night')} known`;
  const quiet = unneeded > 0 ? `, ${formatNumber(unneeded)} of them for nothing` : '';
  const short =
    ranShort === 0
      ? 'none ran short'
      : `${formatNumber(ranShort)} ran short, ${missed === 0 ? 'none missed' : `${formatNumber(missed)} missed`}`;
  return `${span}: this limit would have warned on ${formatNumber(warned)}${quiet}; ${short}.`;
}
