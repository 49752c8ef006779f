import { z } from 'zod';
import { localSecondsOf } from '../domain/zoned-time.ts';
import { calendarDaysAtOnce, settingSections, statedEffectRange } from '../domain/site-settings.ts';
import { shiftFaults } from '../domain/shift-faults.ts';
import { defineContract } from './contract.ts';
import { id, instant, siteParams } from './common.ts';
import { site } from './sites.ts';

const path = '/api/sites/:siteId/settings';

function isLocalDay(text: string): boolean {
  if (!/^\d{4}-\d{2}-\d{2}$/.test(text)) return false;
  const at = new Date(`${text}T00:00:00Z`);
  return !Number.isNaN(at.getTime()) && at.toISOString().slice(0, 10) === text;
}

/** A local date YYYY-MM-DD that the calendar knows. */
const localDay = z
  .string()
  .regex(/^\d{4}-\d{2}-\d{2}$/, 'Enter a date')
  .refine((text) => !/^\d{4}-\d{2}-\d{2}$/.test(text) || isLocalDay(text), 'This date does not exist');

const minuteOfDay = z.int('Enter a time of day').min(0, 'Enter a time of day').max(1439, 'Enter a time of day');

/** Changes of the section that were made so far, as the reader saw it; a save by an older count is refused (409). */
const revision = z.int().min(0);

export const calendarDay = z.object({
  id,
  date: z.string(),
  kind: z.enum(['local event', 'closure']),
  name: z.string(),
  /** Stated effect on arrivals as a range of factors; null: past days of the same name speak. */
  statedEffect: z.tuple([z.number(), z.number()]).nullable(),
});
export type CalendarDayEntry = z.infer<typeof calendarDay>;

export const siteSettings = z.object({
  site,
  /** The site's own days, from a month ago on, by date. */
  ownDays: z.array(calendarDay),
  /** Public holidays of the country and region within a year from now, by date. */
  publicHolidays: z.array(z.object({ date: z.string(), name: z.string() })),
  revisions: z.record(z.enum(settingSections), revision),
});
export type SiteSettings = z.infer<typeof siteSettings>;

export const getSiteSettings = defineContract({
  id: 'getSiteSettings',
  method: 'get',
  path,
  access: 'outlook:read',
  summary: 'The settings of a site: areas and their limits, shifts, planning rules, calendar.',
  params: siteParams,
  reply: siteSettings,
});

export const getHolidayRegions = defineContract({
  id: 'getHolidayRegions',
  method: 'get',
  path: `${path}/holiday-regions`,
  access: 'site-settings:edit',
  summary: 'Countries and regions whose public holidays are known, by ISO 3166 code.',
  params: siteParams,
  reply: z.object({
    countries: z.array(
      z.object({
        code: z.string(),
        name: z.string(),
        regions: z.array(z.object({ code: z.string(), name: z.string() })),
      }),
    ),
  }),
});

const saved = z.object({
  /** The section's revision after the save. */
  revision,
  /** The outlook computed with the new settings; null where none can be, or none was needed. */
  outlookId: id.nullable(),
});

export const rulesBody = z.object({
  revision,
  planningRisk: z.number('Enter a percentage').min(0.01, 'At least 1 %').max(0.5, 'At most 50 %'),
  waitLimitMinutes: z.int('Whole minutes').min(1, 'At least 1 minute').max(1440, 'At most a day').nullable(),
  bedMeetingMinutes: z
    .array(minuteOfDay)
    .max(12, 'At most 12 a day')
    .refine((minutes) => new Set(minutes).size === minutes.length, 'Each time once'),
  country: z.string().regex(/^[A-Z]{2}$/, 'Choose a country'),
  region: z.string().min(1).max(12).nullable(),
});
export type RulesBody = z.infer<typeof rulesBody>;

export const saveRules = defineContract({
  id: 'saveSiteRules',
  method: 'put',
  path: `${path}/rules`,
  access: 'site-settings:edit',
  summary:
    'Save the planning risk, the wait limit, the bed-meeting times, and the country and region of public holidays.',
  params: siteParams,
  body: rulesBody,
  reply: saved,
});

export const shiftBody = z.object({
  /** Null: a new shift. */
  id: id.nullable(),
  name: z.string().trim().min(1, 'Name the shift').max(40, 'At most 40 characters'),
  startMinute: minuteOfDay,
  endMinute: minuteOfDay,
  leadTimeHours: z.int('Whole hours').min(0, 'Not below 0').max(720, 'At most 720 hours').nullable(),
});

export const shiftsBody = z
  .object({ revision, shifts: z.array(shiftBody).max(12, 'At most 12 shifts') })
  .superRefine(({ shifts }, context) => {
    for (const { index, field, at, message } of shiftFaults(shifts)) {
      context.addIssue({
        code: 'custom',
        path: index === null ? ['shifts'] : ['shifts', index, field ?? 'startMinute'],
        message: at === 'Shifts' ? message : `${at}: ${message}`,
      });
    }
  });
export type ShiftsBody = z.infer<typeof shiftsBody>;

export const saveShifts = defineContract({
  id: 'saveShifts',
  method: 'put',
  path: `${path}/shifts`,
  access: 'site-settings:edit',
  summary: 'Save all shifts of the site: no hole in the day, no overlap above two hours.',
  params: siteParams,
  body: shiftsBody,
  reply: saved,
});

export const areaSettings = z.object({
  id,
  alertLimit: z.number('Enter a percentage').min(0.01, 'At least 1 %').max(0.99, 'At most 99 %'),
  escalationNote: z.string().trim().max(2000, 'At most 2,000 characters'),
  bedStep: z.int('Whole numbers only').min(1, 'At least 1').max(50, 'At most 50'),
  noticeHours: z.number('Enter hours').min(0, 'Not below 0').max(720, 'At most 720 hours'),
  bedsPerNurse: z.number('Enter a number').min(0.25, 'At least 0.25').max(50, 'At most 50').nullable(),
  lendsTo: z.array(id).max(100),
});

export const areasBody = z.object({ revision, areas: z.array(areaSettings).min(1).max(100) });
export type AreasBody = z.infer<typeof areasBody>;

export const saveAreas = defineContract({
  id: 'saveAreaSettings',
  method: 'put',
  path: `${path}/areas`,
  access: 'site-settings:edit',
  summary:
    'Save alert limit, escalation text, step, notice, beds a nurse looks after and lending of some or all care areas. Spaces that exist and the safe minimum are the administrator’s.',
  params: siteParams,
  body: areasBody,
  reply: saved,
});

const factor = z
  .number('Enter a percentage')
  .min(statedEffectRange[0], 'Not below −90 %')
  .max(statedEffectRange[1], 'Not above +400 %');

export const calendarBody = z
  .object({
    from: localDay,
    until: localDay,
    kind: z.enum(['local event', 'closure']),
    name: z.string().trim().min(2, 'Name the day').max(80, 'At most 80 characters'),
    statedEffect: z
      .tuple([factor, factor])
      .refine(([low, high]) => low <= high, 'The lower end comes first')
      .nullable(),
  })
  .superRefine(({ from, until }, context) => {
    // Days that do not exist are told of above.
    if (!isLocalDay(from) || !isLocalDay(until)) return;
    const days = (localSecondsOf(until) - localSecondsOf(from)) / 86_400 + 1;
    if (days < 1)
      context.addIssue({ code: 'custom', path: ['until'], message: 'The last day must not lie before the first' });
    if (days > calendarDaysAtOnce) {
      context.addIssue({
        code: 'custom',
        path: ['until'],
        message: `At most ${String(calendarDaysAtOnce)} days at once`,
      });
    }
  });
export type CalendarBody = z.infer<typeof calendarBody>;

export const addCalendarDays = defineContract({
  id: 'addCalendarDays',
  method: 'post',
  path: `${path}/calendar`,
  access: 'site-settings:edit',
  summary:
    'Add days to the site’s own calendar: a local event or a closure, with its stated effect on arrivals as a range.',
  params: siteParams,
  body: calendarBody,
  status: 201,
  reply: saved,
});

export const removeCalendarDay = defineContract({
  id: 'removeCalendarDay',
  method: 'delete',
  path: `${path}/calendar/:entryId`,
  access: 'site-settings:edit',
  summary: 'Take a day out of the site’s own calendar.',
  params: siteParams.extend({ entryId: id }),
  reply: saved,
});

export const settingChange = z.object({
  id,
  at: instant,
  madeBy: z.string(),
  section: z.enum(settingSections),
  subject: z.string().nullable(),
  setting: z.string(),
  before: z.string().nullable(),
  after: z.string().nullable(),
});
export type SettingChange = z.infer<typeof settingChange>;

export const getSettingHistory = defineContract({
  id: 'getSettingHistory',
  method: 'get',
  path: `${path}/history`,
  access: 'site-settings:edit',
  summary: 'Who changed which setting when, with old and new: the newest 500.',
  params: siteParams,
  reply: z.object({ changes: z.array(settingChange), total: z.int() }),
});

/** One night of the last eight weeks, as one area's limit is judged by it. */
export const limitNight = z.object({
  /** The date on which the night starts. */
  date: z.string(),
  /** The highest printed chance of shortfall of the night, in the outlook that stood when it began; null: there was none that counted the area. */
  chance: z.number().min(0).max(1).nullable(),
  /** Whether need was above staffed beds at any full hour of the night; null: not known. */
  ranShort: z.boolean().nullable(),
});

export const getLimitRecord = defineContract({
  id: 'getLimitRecord',
  method: 'get',
  path: `${path}/limit-record`,
  access: 'outlook:read',
  summary:
    'The nights of the last eight weeks by area: what the outlook of the evening said, and whether the area then ran short.',
  params: siteParams,
  reply: z.object({
    from: instant,
    to: instant,
    areas: z.array(z.object({ areaId: id, nights: z.array(limitNight) })),
  }),
});
export type LimitRecordReply = z.infer<(typeof getLimitRecord)['reply']>;
