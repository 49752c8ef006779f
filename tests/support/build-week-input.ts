import type { WeekOutlookInput } from '../../shared/forecasting/week-outlook-types.ts';
import { buildOutlookInput, logTo } from './build-outlook-model.ts';

const hour = 3600;
const day = 24 * hour;

/** A week outlook from 22:20 on the log's last evening: the rest of it, 14 whole days, and the last night to its end. */
export function buildWeekInput(more: Partial<WeekOutlookInput> = {}): WeekOutlookInput {
  const base = buildOutlookInput();
  const { issuedAt } = base;
  // Clocks went forward within the log: its end is 01:00 by local time.
  const midnight = logTo - hour;
  const daysUntil = midnight + 14 * day;
  const first = Math.ceil(issuedAt / hour) * hour;
  const hours = Array.from({ length: (daysUntil - first) / hour + 9 }, (_, h) => first + h * hour);
  // Nights 20:00 to 08:00 and days 07:30 to 20:00, overlapping at the morning's handover.
  const shifts = Array.from({ length: 15 }, (_, d) => [
    { name: 'Day', from: midnight + (d - 1) * day + 7.5 * hour, to: midnight + (d - 1) * day + 20 * hour },
    { name: 'Night', from: midnight + (d - 1) * day + 20 * hour, to: midnight + d * day + 8 * hour },
  ])
    .flat()
    .filter(({ to }) => to > issuedAt)
    .map((shift) => ({ ...shift, leadTimeHours: shift.name === 'Night' ? 48 : null }));
  return {
    ...base,
    hours,
    shifts,
    daysUntil,
    calendar: [],
    ambulance: null,
    areas: base.areas.map((area, a) => ({
      ...area,
      staffedBeds: Array.from({ length: 32 }, (_, step) => ({
        at: midnight - day + Math.floor(step / 2) * day + (step % 2 === 0 ? 8 : 20) * hour,
        beds: a === 0 ? (step % 2 === 0 ? 22 : 18) : 4,
      })),
      noticeHours: a === 0 ? 4 : 72,
      bedsPerNurse: a === 0 ? 4 : null,
    })),
    replications: 600,
    ...more,
  };
}
