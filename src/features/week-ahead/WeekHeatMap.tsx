import type { Site } from '../../../shared/api/sites.ts';
import type { WeekOutlook } from '../../../shared/api/week-outlooks.ts';
import { HourOfWeekMap, hourOfWeekName } from '../../components/HourOfWeekMap.tsx';
import { formatNumber } from '../../lib/format.ts';

/** Typical arrivals in each hour of the week, whole department or one area, every value printed. */
export function WeekHeatMap({
  outlook,
  site,
  areaId,
  onArea,
}: {
  outlook: WeekOutlook;
  site: Site;
  /** Null: the whole department. */
  areaId: string | null;
  onArea: (areaId: string | null) => void;
}) {
  const { areas, ordinaryWeek } = outlook.result;
  const known = site.areas.filter(({ id }) => areas.some((area) => area.areaId === id));
  const chosen = known.find(({ id }) => id === areaId) ?? null;
  const rates =
    chosen === null
      ? Array.from({ length: 168 }, (_, hour) => ordinaryWeek.reduce((sum, own) => sum + own[hour], 0))
      : ordinaryWeek[areas.findIndex((area) => area.areaId === chosen.id)];
  const whose = chosen?.name ?? 'the whole department';
  return (
    <section aria-labelledby="map-title">
      <div className="mb-2 flex flex-wrap items-baseline justify-between gap-x-6 gap-y-1">
        <h2 id="map-title" className="text-section">
          When people arrive
        </h2>
        <label className="flex items-center gap-2 text-side text-ink2 print:hidden">
          Arrivals of
          <select
            className="min-h-9.5 rounded-t-field border-0 border-b-2 border-edge bg-paper px-2 font-bold text-ink"
            value={chosen?.id ?? ''}
            onChange={(event) => onArea(event.target.value === '' ? null : event.target.value)}
          >
            <option value="">the whole department</option>
            {known.map((area) => (
              <option key={area.id} value={area.id}>
                {area.name}
              </option>
            ))}
          </select>
        </label>
      </div>
      <p className="mb-2 max-w-3xl text-quiet text-ink2">
        Arrivals to expect in each hour of an ordinary week of the coming days’ season and level; holidays and events
        are left out.
      </p>
      <HourOfWeekMap
        name={`Arrivals of ${whose} through the week`}
        caption={`Arrivals an hour of ${whose} by hour of the week.`}
        ratePerHour={rates}
        say={(index) => `${hourOfWeekName(index)}: ${formatNumber(rates[index], 1)} arrivals an hour, ${whose}`}
      />
    </section>
  );
}
