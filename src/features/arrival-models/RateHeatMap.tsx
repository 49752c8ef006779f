import type { ModelDetail } from '../../../shared/api/arrival-models.ts';
import { HourOfWeekMap, hourOfWeekName } from '../../components/HourOfWeekMap.tsx';
import { formatNumber } from '../../lib/format.ts';

/** Arrivals an hour through the week of one area, each with its own interval. */
export function RateHeatMap({ area }: { area: ModelDetail['areas'][number] }) {
  const say = (index: number) =>
    `${hourOfWeekName(index)}: ${formatNumber(area.ratePerHour[index], 2)} arrivals an hour, ` +
    `95\u00a0% interval ${formatNumber(area.rateLow[index], 2)} to ${formatNumber(area.rateHigh[index], 2)}`;
  return (
    <HourOfWeekMap
      name={`Arrivals in ${area.name} through the week`}
      caption={`Arrivals an hour in ${area.name} by hour of the week, at the level of now.`}
      ratePerHour={area.ratePerHour}
      say={say}
    />
  );
}
