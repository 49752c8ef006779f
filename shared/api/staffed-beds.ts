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

export const savePlanBody = z.object({
  areas: z.array(planArea).min(1).max(100),
  reason: note.min(3, 'Say why'),
  /** The version that was read before the change, 0 for none: if a newer one was saved meanwhile, this is refused (409). */
  basedOnVersion: z.int().min(0).optional(),
});

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

const planVersion = z.object({ version: z.int(), savedAt: instant, savedBy: z.string(), reason: z.string() });
export type PlanVersion = z.infer<typeof planVersion>;

export const listPlanVersions = defineContract({
  id: 'listStaffedBedPlanVersions',
  method: 'get',
  path: '/api/sites/:siteId/staffed-beds/versions',
  access: 'outlook:read',
  summary: 'Every version of the staffed-bed plan, newest first: who saved it, when and why.',
  params: siteParams,
  reply: z.object({ versions: z.array(planVersion) }),
});

export const getPlanVersion = defineContract({
  id: 'getStaffedBedPlanVersion',
  method: 'get',
  path: '/api/sites/:siteId/staffed-beds/versions/:version',
  access: 'outlook:read',
  summary: 'A version of the staffed-bed plan, as it was saved.',
  params: siteParams.extend({ version: z.coerce.number<number>().int().min(1) }),
  reply: planVersion.extend({ areas: z.array(planArea) }),
});

/** The longest that one dated exception may last, days. */
export const exceptionDays = 62;

export const addBedExceptionBody = z
  .object({
    areaId: id,
    fromAt: instant,
    untilAt: instant,
    beds,
    reason: note.min(3, 'Say why'),
  })
  .refine(({ fromAt, untilAt }) => untilAt > fromAt, { message: 'The end must lie after the start', path: ['untilAt'] })
  .refine(({ fromAt, untilAt }) => untilAt - fromAt <= exceptionDays * 86_400, {
    message: `At most ${String(exceptionDays)} days: for longer, change the plan`,
    path: ['untilAt'],
  });
export type AddBedExceptionBody = z.infer<typeof addBedExceptionBody>;

export const addBedException = defineContract({
  id: 'addStaffedBedException',
  method: 'post',
  path: '/api/sites/:siteId/staffed-bed-exceptions',
  access: 'staffed-beds:plan',
  summary: 'Plan other staffed beds for one area between two instants: a dated exception.',
  params: siteParams,
  body: addBedExceptionBody,
  status: 201,
  reply: z.object({ changeId: id, outlookId: id.nullable() }),
});

export const removeBedException = defineContract({
  id: 'removeStaffedBedException',
  method: 'delete',
  path: '/api/sites/:siteId/staffed-bed-exceptions/:changeId',
  access: 'staffed-beds:plan',
  summary: 'Take a dated exception back; one that has begun ends now.',
  params: siteParams.extend({ changeId: id }),
  reply: z.object({ outlookId: id.nullable() }),
});

export const requiredBeds = z.object({
  /** When the week outlook was issued; null before the first. */
  issuedAt: instant.nullable(),
  planningRisk: z.number(),
  areas: z.array(
    z.object({
      areaId: id,
      shifts: z.array(
        z.object({
          name: z.string(),
          from: instant,
          to: instant,
          /** Constant staffed beds over the shift that keep the chance of any shortfall at the planning risk, in the area's steps. */
          beds: z.int(),
          /** Of those, how many cannot be had because the bed spaces do not exist. */
          doNotExist: z.int(),
        }),
      ),
    }),
  ),
});
export type RequiredBeds = z.infer<typeof requiredBeds>;

export const getRequiredBeds = defineContract({
  id: 'getRequiredBeds',
  method: 'get',
  path: '/api/sites/:siteId/staffed-beds/required',
  access: 'outlook:read',
  summary: 'Beds required at the planning risk by area and shift, from the newest week outlook.',
  params: siteParams,
  reply: requiredBeds,
});
