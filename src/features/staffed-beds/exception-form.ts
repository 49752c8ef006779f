import { z } from 'zod';
import type { CareArea, Site } from '../../../shared/api/sites.ts';
import { addBedExceptionBody, type AddBedExceptionBody } from '../../../shared/api/staffed-beds.ts';
import { readClock } from '../../../shared/domain/clock-text.ts';
import { withArticle } from '../../../shared/domain/identifier-kind.ts';
import { bedsFault } from '../../../shared/domain/plan-faults.ts';
import { screenNote } from '../../../shared/domain/screen-note.ts';
import { instantOfLocal } from '../../../shared/domain/shift-times.ts';
import { localSecondsOf } from '../../../shared/domain/zoned-time.ts';
import { zoneOf } from '../../lib/format.ts';

/** Chosen instead of a shift: times of one's own. */
export const ownTimes = 'own times';

/** What stands in the fields, as text. */
export interface ExceptionForm {
  areaId: string;
  date: string;
  /** A shift's id, or `ownTimes`. */
  shiftId: string;
  fromTime: string;
  untilDate: string;
  untilTime: string;
  beds: string;
  reason: string;
}

export function emptyException(site: Site, date: string): ExceptionForm {
  return {
    areaId: site.areas.at(0)?.id ?? '',
    date,
    shiftId: site.shifts.at(0)?.id ?? ownTimes,
    fromTime: '07:00',
    untilDate: date,
    untilTime: '19:00',
    beds: '',
    reason: '',
  };
}

/** The times that the fields mean, UTC seconds; null for one that they do not give. A shift ends where the next one starts. */
export function exceptionTimes(
  site: Site,
  form: Pick<ExceptionForm, 'date' | 'shiftId' | 'fromTime' | 'untilDate' | 'untilTime'>,
): { fromAt: number | null; untilAt: number | null } {
  const zone = zoneOf(site.timeZone);
  const instant = (date: string, minute: number | null) =>
    /^\d{4}-\d{2}-\d{2}$/.test(date) && minute !== null ? instantOfLocal(zone, localSecondsOf(date, minute)) : null;
  const shift = site.shifts.find(({ id }) => id === form.shiftId);
  if (!shift) {
    return {
      fromAt: instant(form.date, readClock(form.fromTime)),
      untilAt: instant(form.untilDate, readClock(form.untilTime)),
    };
  }
  // The overlap at handover belongs to the incoming shift.
  const starts = site.shifts.map(({ startMinute }) => startMinute);
  const next = Math.min(...starts.map((start) => (start > shift.startMinute ? start : start + 1440)));
  return { fromAt: instant(form.date, shift.startMinute), untilAt: instant(form.date, next) };
}

/** The fields' schema: the server's own, with each fault beside its field. */
export function exceptionSchema(site: Site, now: number) {
  return z
    .object({
      areaId: z.string(),
      date: z.string(),
      shiftId: z.string(),
      fromTime: z.string(),
      untilDate: z.string(),
      untilTime: z.string(),
      beds: z.string(),
      reason: z.string(),
    })
    .transform((form, context): AddBedExceptionBody => {
      const fault = (path: keyof ExceptionForm, message: string) =>
        context.addIssue({ code: 'custom', path: [path], message });
      const area: CareArea | undefined = site.areas.find(({ id }) => id === form.areaId);
      const beds = form.beds.trim() === '' ? Number.NaN : Number(form.beds);
      const bedFault = area && Number.isInteger(beds) ? bedsFault(area, beds) : 'Enter a whole number';
      if (!area) fault('areaId', 'Choose an area');
      if (bedFault !== null) fault('beds', bedFault);
      const own = form.shiftId === ownTimes;
      const { fromAt, untilAt } = exceptionTimes(site, form);
      if (fromAt === null) fault(own && /^\d{4}/.test(form.date) ? 'fromTime' : 'date', 'Enter a date and a time');
      if (untilAt === null && own) fault('untilTime', 'Enter a date and a time');
      if (untilAt !== null && untilAt <= now) fault(own ? 'untilTime' : 'date', 'This time has passed already');
      const kind = screenNote(form.reason);
      if (kind !== null) {
        fault('reason', `This looks like ${withArticle(kind)}. Leave out anything that could identify a person.`);
      }
      const body = { areaId: form.areaId, fromAt: fromAt ?? 0, untilAt: untilAt ?? 1, beds, reason: form.reason };
      const parsed = addBedExceptionBody.safeParse(body);
      if (parsed.success) return parsed.data;
      for (const { path, message } of parsed.error.issues) {
        if (path[0] === 'untilAt' && fromAt !== null && untilAt !== null) fault('untilTime', message);
        if (path[0] === 'reason') fault('reason', message);
      }
      return z.NEVER;
    });
}
