import type { FieldErrors, Resolver } from 'react-hook-form';
import { censusArea, censusBody } from '../../../shared/api/censuses.ts';
import type { Census, CensusBody } from '../../../shared/api/censuses.ts';

/** What stands in the fields: text, since a field can be empty. */
export interface CensusForm {
  areas: { areaId: string; present: string; waiting: string; boarding: string }[];
  undecidedWaiting: string;
  ambulancesHolding: string;
  arrivalsSinceMidnight: string;
}

export const censusFields = ['present', 'waiting', 'boarding'] as const;
export type CensusField = (typeof censusFields)[number];

const text = (value: number | null | undefined) => (value === null || value === undefined ? '' : String(value));

/** The fields as the newest census fills them; an area never counted is empty, never zero. */
export function censusFormOf(areaIds: readonly string[], census: Census | undefined): CensusForm {
  return {
    areas: areaIds.map((areaId) => {
      const counted = census?.areas.find((area) => area.areaId === areaId);
      return {
        areaId,
        present: text(counted?.present),
        waiting: text(counted?.waiting),
        boarding: text(counted?.boarding),
      };
    }),
    undecidedWaiting: text(census?.undecided?.waiting),
    ambulancesHolding: text(census?.undecided?.ambulancesHolding),
    arrivalsSinceMidnight: text(census?.arrivalsSinceMidnight?.count),
  };
}

function toNumber(value: string): number {
  return value.trim() === '' ? Number.NaN : Number(value.replace(',', '.'));
}

const optional = (value: string) => (value.trim() === '' ? null : toNumber(value));

/** Whether an area's figures differ from the newest census. */
export function isAreaEdited(values: CensusForm, base: CensusForm, index: number): boolean {
  return censusFields.some((field) => values.areas[index]?.[field] !== base.areas[index]?.[field]);
}

/**
 * The census to send: the areas that were edited (all that have figures, when nothing changed and
 * everything is counted again), and the figures of the whole department that were edited.
 */
export function censusBodyOf(values: CensusForm, base: CensusForm, takenAt: number, countAgain = false): CensusBody {
  const edited = (field: 'undecidedWaiting' | 'ambulancesHolding' | 'arrivalsSinceMidnight') =>
    countAgain || values[field] !== base[field];
  const undecidedEdited = edited('undecidedWaiting') || edited('ambulancesHolding');
  return {
    takenAt,
    areas: values.areas
      .filter((area, index) => (countAgain ? area.present.trim() !== '' : isAreaEdited(values, base, index)))
      .map((area) => ({
        areaId: area.areaId,
        present: toNumber(area.present),
        waiting: toNumber(area.waiting),
        boarding: toNumber(area.boarding),
      })),
    undecidedWaiting: undecidedEdited ? optional(values.undecidedWaiting) : null,
    ambulancesHolding: undecidedEdited ? optional(values.ambulancesHolding) : null,
    arrivalsSinceMidnight: edited('arrivalsSinceMidnight') ? optional(values.arrivalsSinceMidnight) : null,
  };
}

function sentence(message: string | undefined, value: string): string {
  if (value.trim() === '') return 'Enter a number; 0 if there is nobody';
  if (Number.isNaN(toNumber(value))) return 'Numbers only';
  return message ?? 'Check this figure';
}

/** What the check needs beside the fields. */
export interface CensusContext {
  base: CensusForm;
  now: () => number;
}

/** Checks the fields with the server's own schema and puts each fault beside its field. */
export const censusResolver: Resolver<CensusForm, CensusContext> = (values, context) => {
  if (!context) throw new Error('the census form has no context');
  const { base, now } = context;
  const errors: FieldErrors<CensusForm> = {};
  const areaErrors: Record<string, { type: string; message: string }>[] = [];
  values.areas.forEach((area, index) => {
    if (!isAreaEdited(values, base, index)) return;
    const parsed = censusArea.safeParse({
      areaId: area.areaId,
      present: toNumber(area.present),
      waiting: toNumber(area.waiting),
      boarding: toNumber(area.boarding),
    });
    if (parsed.success) return;
    const found: Record<string, { type: string; message: string }> = {};
    for (const issue of parsed.error.issues) {
      const field = String(issue.path[0]) as CensusField;
      found[field] ??= { type: 'fault', message: sentence(issue.message, area[field]) };
    }
    areaErrors[index] = found;
  });
  if (areaErrors.length > 0) errors.areas = areaErrors;
  const body = censusBodyOf(values, base, now());
  for (const field of ['undecidedWaiting', 'ambulancesHolding', 'arrivalsSinceMidnight'] as const) {
    const parsed = censusBody.shape[field].safeParse(body[field]);
    if (!parsed.success)
      errors[field] = { type: 'fault', message: sentence(parsed.error.issues[0]?.message, values[field]) };
  }
  if (body.ambulancesHolding !== null && !errors.ambulancesHolding && !errors.undecidedWaiting) {
    if (body.undecidedWaiting === null)
      errors.undecidedWaiting = { type: 'fault', message: 'Count the ambulances that hold among the waiting' };
    else if (body.ambulancesHolding > body.undecidedWaiting)
      errors.ambulancesHolding = { type: 'fault', message: 'At most as many as are waiting' };
  }
  return Object.keys(errors).length > 0 ? { values: {}, errors } : { values, errors: {} };
};
