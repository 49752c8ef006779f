import { zoneOf } from '../lib/format.ts';

/** Says in which zone the times are, where this device's clock shows another time than the site's. */
export function SiteTimes({ siteName, timeZone, now }: { siteName: string; timeZone: string; now: number }) {
  const offset = zoneOf(timeZone).offsetAt(now);
  const own = -new Date(now * 1000).getTimezoneOffset() * 60;
  if (offset === own) return null;
  const minutes = Math.round(Math.abs(offset - own) / 60);
  const hours =
    minutes % 60 === 0
      ? `${String(minutes / 60)} h`
      : `${String(Math.floor(minutes / 60))} h ${String(minutes % 60)} min`;
  return (
    <p className="page-pad text-quiet text-ink2">
      All times are those of {siteName} ({timeZone}), {hours} {offset > own ? 'ahead of' : 'behind'} this device.
    </p>
  );
}
