import type { CalendarBody } from '../../../shared/api/site-settings.ts';
import { localDate, localSecondsOf, makeZone } from '../../../shared/domain/zoned-time.ts';
import { newId } from '../../database/new-id.ts';
import type { Dependencies } from '../../dependencies.ts';
import { CalendarEntry } from '../../entities/CalendarEntry.ts';
import { badInput, notFound, type Fault } from '../../errors.ts';
import { changeSettings, textFaults, type SettingsContext } from './change-settings.ts';

const daySeconds = 86_400;
/** Further ahead nothing is planned here, seconds. */
const furthestAhead = 3 * 366 * daySeconds;

/** Adds one day or a run of days to the site's own calendar. */
export async function addCalendarDays(deps: Dependencies, context: SettingsContext, body: CalendarBody) {
  const { from, until, kind, name, statedEffect } = body;
  const { site, now } = context;
  const dates: string[] = [];
  for (let at = localSecondsOf(from); at <= localSecondsOf(until); at += daySeconds) dates.push(localDate(at));
  return changeSettings(deps, context, 'calendar', null, async (manager) => {
    const faults: Fault[] = textFaults('name', name);
    if (localSecondsOf(until) > makeZone(site.timeZone).toLocal(now) + furthestAhead) {
      faults.push({ at: 'until', message: 'Days more than three years ahead are not taken.' });
    }
    for (const date of dates) {
      if (await manager.existsBy(CalendarEntry, { siteId: site.id, date, name })) {
        faults.push({ at: date, message: `“${name}” stands there already. Take it out first to change it.` });
      }
    }
    if (faults.length > 0) throw badInput('The days were refused.', faults);
    for (const date of dates) {
      await manager.insert(CalendarEntry, { id: newId(), siteId: site.id, date, kind, name, statedEffect });
    }
    const after = describe({ kind, statedEffect });
    return dates.map((date) => ({ subject: `${name}, ${date}`, setting: 'Calendar day', before: null, after }));
  });
}

/** Takes a day out of the site's own calendar. */
export async function removeCalendarDay(deps: Dependencies, context: SettingsContext, entryId: string) {
  return changeSettings(deps, context, 'calendar', null, async (manager) => {
    const entry = await manager.findOneBy(CalendarEntry, { id: entryId, siteId: context.site.id });
    if (!entry) throw notFound('This calendar day');
    await manager.delete(CalendarEntry, { id: entry.id });
    return [{ subject: `${entry.name}, ${entry.date}`, setting: 'Calendar day', before: describe(entry), after: null }];
  });
}

function describe({ kind, statedEffect }: Pick<CalendarEntry, 'kind' | 'statedEffect'>): string {
  const named = kind === 'closure' ? 'Closure' : 'Local event';
  if (statedEffect === null) return `${named}, no effect stated`;
  const [low, high] = statedEffect.map((factor) => {
    const points = Math.round((factor - 1) * 100);
    return `${points < 0 ? '−' : '+'}${String(Math.abs(points))} %`;
  });
  return `${named}, arrivals ${low} to ${high}`;
}
