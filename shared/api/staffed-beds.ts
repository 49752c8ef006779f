import { z } from 'zod';
import { defineContract } from './contract.ts';
import { id, instant, note, siteParams } from './common.ts';

const beds = z.int('Whole numbers only').min(0, 'Not below 0').max(500, 'At most 500');

/** Staffed beds of one area by half hour of week, Monday 00:00 first, local time. */
export const planArea = z.object({ areaId: id, halfHours: z.array(beds).length(336) });

export const bedChange = z.object({
  id,
  areaId: id,
  fromAt: instant,
  untilAt: instant,
  /** Staffed beds in force in that time; blocked bed spaces are already taken off. */
  beds: z.int(),
  blocked: z.int(),
  reason: z.string(),
  kind: z.enum(['dated exception', 'change now']),
  madeBy: z.string(),
  madeAt: instant,
});

export const staffedBeds = z.object({
  plan: z
    .object({
      version: z.int(),
      savedAt: instant,
      savedBy: z.string(),
      reason: z.string(),
      areas: z.array(planArea),
    })
    .nullable(),
  /** Exceptions and changes that are in force now or later. */
  changes: z.array(bedChange),
});

export const getStaffedBeds = defineContract({
  id: 'getStaffedBeds',
  method: 'get',
  path: '/api/sites/:siteId/staffed-beds',
  access: 'outlook:read',
  summary: 'The staffed-bed plan in force, with dated exceptions and changes for now.',
  params: siteParams,
  reply: staffedBeds,
});

export const savePlanBody = z.object({ areas: z.array(planArea).min(1).max(100), reason: note.min(3, 'Say why') });

export const savePlan = defineContract({
  id: 'saveStaffedBedPlan',
  method: 'put',
  path: '/api/sites/:siteId/staffed-beds',
  access: 'staffed-beds:plan',
  summary: 'Save a new version of the staffed-bed plan, every care area by half hour of week.',
  params: siteParams,
  body: savePlanBody,
  reply: z.object({ version: z.int() }),
});

export const changeBedsBody = z.object({
  areaId: id,
  beds,
  blocked: beds,
  /** The change ends with the current shift or the next one. */
  until: z.enum(['end of this shift', 'end of next shift']),
  reason: note.min(3, 'Say why, without patient details'),
});
export type ChangeBedsBody = z.infer<typeof changeBedsBody>;

export const changeBedsNow = defineContract({
  id: 'changeStaffedBedsNow',
  method: 'post',
  path: '/api/sites/:siteId/staffed-bed-changes',
  access: 'staffed-beds:change-now',
  summary: 'Change the staffed beds of one area now, until the end of this or the next shift, with a reason.',
  params: siteParams,
  body: changeBedsBody,
  status: 201,
  reply: z.object({ changeId: id, outlookId: id.nullable() }),
});
