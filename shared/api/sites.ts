import { z } from 'zod';
import { defineContract } from './contract.ts';
import { id, siteParams } from './common.ts';

const minuteOfDay = z.int().min(0).max(1439);

export const careArea = z.object({
  id,
  name: z.string(),
  /** What a space is: beds, or chairs for people who need no bed. */
  spaceKind: z.enum(['bed', 'chair']),
  /** Bed spaces that exist. */
  spaces: z.int().min(0).max(500),
  /** Staffed beds are never planned or suggested below this. */
  safeMinimum: z.int().min(0).max(500),
  /** Beds are opened and closed in multiples of this. */
  bedStep: z.int().min(1).max(50),
  /** Hours of notice to open more. */
  noticeHours: z.number().min(0).max(720),
  alertLimit: z.number().min(0.01).max(0.99),
  /** The site's own escalation text for this area. */
  escalationNote: z.string().max(2000),
  /** Staffed beds that one nurse looks after, stated by the site; null: not stated. */
  bedsPerNurse: z.number().min(0.25).max(50).nullable(),
  /** The areas that may be lent staffed beds of this one. */
  lendsTo: z.array(id),
});
export type CareArea = z.infer<typeof careArea>;

export const shift = z.object({
  id,
  name: z.string(),
  startMinute: minuteOfDay,
  /** May be earlier than the start: the shift then ends on the next day. */
  endMinute: minuteOfDay,
  /** Hours before its start until which staff can still be booked for it; null: not stated. */
  leadTimeHours: z.int().min(0).max(720).nullable(),
});
export type Shift = z.infer<typeof shift>;

export const site = z.object({
  id,
  name: z.string(),
  groupName: z.string(),
  timeZone: z.string(),
  country: z.string(),
  region: z.string().nullable(),
  planningRisk: z.number().min(0.01).max(0.5),
  /** Minutes of the local day at which the site meets over its beds, ascending; empty: no such meeting. */
  bedMeetingMinutes: z.array(minuteOfDay),
  /** A wait for a bed space past this is too long by the site's own rule, minutes; null: not stated. */
  waitLimitMinutes: z.int().min(1).max(1440).nullable(),
  areas: z.array(careArea),
  shifts: z.array(shift),
});
export type Site = z.infer<typeof site>;

export const getSite = defineContract({
  id: 'getSite',
  method: 'get',
  path: '/api/sites/:siteId',
  access: 'outlook:read',
  summary: 'The site: care areas in its own order, shifts, limits, time zone.',
  params: siteParams,
  reply: site,
});
