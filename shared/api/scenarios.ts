import { z } from 'zod';
import { defineContract } from './contract.ts';
import { id, instant, note, siteParams } from './common.ts';
import { caution } from './outlooks.ts';

const wholeNumber = 'Whole numbers only';
const percent = (least: number, most: number) =>
  z
    .int(wholeNumber)
    .min(least, `Not below ${String(least)} %`)
    .max(most, `At most ${String(most)} %`);
const patients = z.int(wholeNumber).min(1, 'At least 1').max(500, 'At most 500');

/** One change that a plan tries: see shared/domain/plan-change. */
export const planChange = z.discriminatedUnion('kind', [
  z.strictObject({ kind: z.literal('demand'), areaId: id.nullable(), percent: percent(-90, 200) }),
  z.strictObject({
    kind: z.literal('stay'),
    areaId: id.nullable(),
    who: z.enum(['everyone', 'admitted']),
    percent: percent(-80, 200),
  }),
  z.strictObject({
    kind: z.literal('beds'),
    areaId: id,
    from: instant,
    to: instant,
    beds: z.int(wholeNumber).min(-499, 'At most 499 fewer').max(499, 'At most 499 more'),
  }),
  z.strictObject({ kind: z.literal('boarding out'), areaId: id, patients, by: instant }),
  z.strictObject({ kind: z.literal('surge'), areaId: id, from: instant, to: instant, patients }),
  z.strictObject({ kind: z.literal('closed'), areaId: id, from: instant, to: instant, toAreaId: id.nullable() }),
]);

export const planChanges = z
  .array(planChange)
  .min(1, 'A plan needs at least one change')
  .max(40, 'At most 40 changes in one plan');

const bedStep = z.object({ at: instant, beds: z.int() });
const row = z.array(z.number());

/** Expected flows and who is present, by area: what the exact method answers from in the browser. */
export const exactInputs = z.object({
  /** UTC seconds of time 0. */
  startAt: z.number(),
  bins: z.int(),
  hours: z.array(instant),
  segmentAt: row,
  endSegment: z.array(z.int()),
  areas: z.array(
    z.object({
      areaId: id,
      startSegment: z.int(),
      /** By stream and segment: arrivals and departures an hour. */
      ratePerHour: z.array(row),
      hazardPerHour: z.array(row),
      present: z.array(z.object({ patients: z.int(), shares: row })),
      startMeans: row.nullable(),
      boarders: z.int(),
      boarderStream: z.int(),
      staged: z.boolean(),
      arrivalVariance: z.number(),
      outflowNodes: z.array(z.object({ value: z.number(), weight: z.number() })),
      staffedBeds: z.array(bedStep),
    }),
  ),
});

/** What plans are tried against: as is. */
export const whatIfBasis = z.object({
  /** Names these inputs; plans saved on the same basis can stand side by side. */
  digest: z.string(),
  issuedAt: instant,
  modelId: id,
  planVersion: z.int(),
  areas: z.array(
    z.object({
      areaId: id,
      name: z.string(),
      spaceKind: z.enum(['bed', 'chair']),
      spaces: z.int(),
      safeMinimum: z.int(),
      bedStep: z.int(),
      alertLimit: z.number(),
      noticeHours: z.number(),
      /** When it was counted; null: not counted, the model's own expectation stands in its place. */
      countedAt: instant.nullable(),
      boarding: z.int().nullable(),
      staffedBeds: z.array(bedStep),
    }),
  ),
  planningRisk: z.number(),
  /** Shifts within the hours looked at, ascending; they may overlap at handover. */
  shifts: z.array(z.object({ name: z.string(), from: instant, to: instant })),
  exact: exactInputs,
});
export type WhatIfBasis = z.infer<typeof whatIfBasis>;

export const getWhatIf = defineContract({
  id: 'getWhatIf',
  method: 'get',
  path: '/api/sites/:siteId/what-if',
  access: 'scenario:read',
  summary: 'Seven days as they stand, prepared so that the browser can answer a change at once by the exact method.',
  params: siteParams,
  reply: z.object({
    now: instant,
    basis: whatIfBasis.nullable(),
    /** Why there is nothing to try plans against, and what to do. */
    missing: z.object({ reason: z.string(), next: z.string() }).nullable(),
    /** What is to be said now of the model and the logs behind it. */
    cautions: z.array(caution),
  }),
});

const comparedFigure = z.object({
  asIs: z.number(),
  plan: z.number(),
  /** Plan minus as is, with its 95 % interval from differences paired by replication. */
  difference: z.number(),
  low: z.number(),
  high: z.number(),
});
export type ComparedFigure = z.infer<typeof comparedFigure>;

export const scenarioResult = z.object({
  engineVersion: z.string(),
  replications: z.int(),
  seed: z.int(),
  lengthOfStay: z.enum(['exponential', 'empirical']),
  hours: z.array(instant),
  shifts: z.array(z.object({ name: z.string(), from: instant, to: instant })),
  waitLimitMinutes: z.int().nullish(),
  rows: z.array(
    z.object({
      /** Null: the department, where "some area is short" is compared. */
      areaId: id.nullable(),
      shifts: z.array(comparedFigure),
      bedHoursShort: comparedFigure,
      /** Patients of each shift who wait longer than the site's limit for a bed space, on average; null where it cannot be known. */
      waits: z.array(comparedFigure).nullish(),
      hours: z.object({ asIs: z.array(z.number()), plan: z.array(z.number()) }),
    }),
  ),
});
export type ScenarioResult = z.infer<typeof scenarioResult>;

/** Whether a plan's beds hold on the dates it was tried on, or every week from now on. */
export const adoptions = ['these dates', 'every week'] as const;

export const scenarioStates = ['saved', 'confirming', 'confirmed', 'failed', 'cancelled', 'withdrawn'] as const;

/** A saved plan as lists show it. */
export const scenarioLine = z.object({
  id,
  name: z.string(),
  state: z.enum(scenarioStates),
  changes: z.array(planChange),
  savedAt: instant,
  savedBy: z.string(),
  /** True for the person who asks. */
  own: z.boolean(),
  /** Of the basis that it stands on. */
  basisDigest: z.string(),
  basisIssuedAt: instant,
  confirmedAt: instant.nullable(),
  adoptedAt: instant.nullable(),
  adoptedBy: z.string().nullable(),
  adoptedAs: z.enum(adoptions).nullable(),
  /** While it is being confirmed: a share 0..1 and a few words. */
  progress: z.object({ share: z.number(), text: z.string() }).nullable(),
  /** Why the last confirmation failed. */
  error: z.string().nullable(),
});
export type ScenarioLine = z.infer<typeof scenarioLine>;

export const scenario = scenarioLine.extend({
  seed: z.int(),
  modelId: id,
  engineVersion: z.string(),
  softwareVersion: z.string(),
  result: scenarioResult.nullable(),
  resultDigest: z.string().nullable(),
});
export type Scenario = z.infer<typeof scenario>;

const scenarios = '/api/sites/:siteId/scenarios';
const scenarioParams = siteParams.extend({ scenarioId: id });

export const listScenarios = defineContract({
  id: 'listScenarios',
  method: 'get',
  path: scenarios,
  access: 'scenario:read',
  summary: 'Saved plans of the site, newest first; withdrawn ones are left out.',
  params: siteParams,
  reply: z.object({ scenarios: z.array(scenarioLine) }),
});

export const saveScenarioBody = z.object({
  name: z.string().trim().min(3, 'At least 3 characters').max(80, 'At most 80 characters'),
  changes: planChanges,
});

export const saveScenario = defineContract({
  id: 'saveScenario',
  method: 'post',
  path: scenarios,
  access: 'scenario:save',
  summary: 'Save a plan with the inputs and the seed that it will be confirmed on.',
  params: siteParams,
  body: saveScenarioBody,
  status: 201,
  reply: scenario,
});

export const getScenario = defineContract({
  id: 'getScenario',
  method: 'get',
  path: `${scenarios}/:scenarioId`,
  access: 'scenario:read',
  summary: 'A saved plan with its confirmed differences, if it was confirmed.',
  params: scenarioParams,
  reply: scenario,
});

export const withdrawScenario = defineContract({
  id: 'withdrawScenario',
  method: 'post',
  path: `${scenarios}/:scenarioId/withdrawal`,
  access: 'scenario:save',
  summary: 'Withdraw a plan of one’s own: it leaves the list; what was adopted from it stays in force.',
  params: scenarioParams,
  reply: scenarioLine,
});

export const confirmScenario = defineContract({
  id: 'confirmScenario',
  method: 'post',
  path: `${scenarios}/:scenarioId/confirmation`,
  access: 'scenario:save',
  summary: 'Simulate the plan against as is with common random numbers, in the background.',
  params: scenarioParams,
  status: 202,
  reply: scenarioLine,
});

export const cancelConfirmation = defineContract({
  id: 'cancelScenarioConfirmation',
  method: 'post',
  path: `${scenarios}/:scenarioId/confirmation/cancel`,
  access: 'scenario:save',
  summary: 'Cancel the confirmation of a plan that waits or runs.',
  params: scenarioParams,
  reply: scenarioLine,
});

export const repeatScenario = defineContract({
  id: 'repeatScenario',
  method: 'post',
  path: `${scenarios}/:scenarioId/repeat`,
  access: 'scenario:save',
  summary: 'Compute a confirmed plan again from its stored inputs and compare the digits.',
  params: scenarioParams,
  reply: z.object({ sameDigits: z.boolean(), storedDigest: z.string(), repeatedDigest: z.string() }),
});

export const adoptScenario = defineContract({
  id: 'adoptScenario',
  method: 'post',
  path: `${scenarios}/:scenarioId/adoption`,
  access: 'staffed-beds:plan',
  summary:
    'Put a confirmed plan’s staffed beds into the staffed-bed plan, with a reason: as dated exceptions, or as a new version of the weekly plan.',
  params: scenarioParams,
  body: z.object({ reason: note.min(3, 'Say why'), as: z.enum(adoptions).default('these dates') }),
  /** How many dated exceptions were made, or the version of the weekly plan that was saved. */
  reply: z.object({ scenario: scenarioLine, exceptions: z.int(), planVersion: z.int().nullable() }),
});
