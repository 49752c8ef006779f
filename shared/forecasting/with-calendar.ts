import { localDate, makeZone } from '../domain/zoned-time.ts';
import type { OutlookInput } from './outlook-types.ts';
import type { OutlookModel } from './prepare-need.ts';

const weekSeconds = 7 * 86_400;

/** First local date of an outlook's own calendar: a week before it, since a holiday acts on the days about it. */
export function calendarFrom(input: Pick<OutlookInput, 'issuedAt' | 'timeZone'>): string {
  return localDate(makeZone(input.timeZone).toLocal(input.issuedAt) - weekSeconds);
}

/**
 * The model with the unusual days that an outlook's input names in place of those known at the fit, from `calendarFrom`
 * on: a day entered or taken away since the fit counts. Without a calendar in the input the model is left as it is.
 */
export function withCalendar(model: OutlookModel, input: OutlookInput): OutlookModel {
  const { calendar } = input;
  if (calendar === undefined) return model;
  const first = calendarFrom(input);
  const before = <Day extends { date: string }>(days: readonly Day[]): Day[] => days.filter(({ date }) => date < first);
  return {
    arrival: { ...model.arrival, calendar: before(model.arrival.calendar) },
    stay: model.stay,
    calendar: [...before(model.calendar), ...calendar.filter(({ date }) => date >= first)],
  };
}
