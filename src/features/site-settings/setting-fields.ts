import type { FieldErrors, FieldValues, Resolver } from 'react-hook-form';
import type { z } from 'zod';
import { withArticle } from '../../../shared/domain/identifier-kind.ts';
import { screenNote } from '../../../shared/domain/screen-note.ts';

/** A typed number: not a number where it is none, so that the schema refuses it; null where the field is empty. */
export function numberOf(text: string): number | null {
  const trimmed = text.trim().replace(',', '.');
  return trimmed === '' ? null : Number(trimmed);
}

/** The same where a number must stand. */
export const neededNumber = (text: string) => numberOf(text) ?? Number.NaN;

/** A share as it stands in a field: 0.25 is "25". */
export const percentText = (share: number) => String(Math.round(share * 1000) / 10);

/** A share that a field means; the schema refuses what is none. */
export const shareOf = (text: string) => Math.round(neededNumber(text) * 10) / 1000;

export const optionalText = (value: number | null) => (value === null ? '' : String(value));

/** Why a text cannot be kept; undefined if it can. */
export function identifierFault(text: string): string | undefined {
  const kind = screenNote(text);
  return kind === null
    ? undefined
    : `This looks like ${withArticle(kind)}. Leave out anything that could identify a person.`;
}

/** One fault beside one field: the path that the form knows it by. */
export interface FieldFault {
  path: readonly (string | number)[];
  message: string;
}

/**
 * Checks a form's text with the server's own schema, and puts each fault beside its field.
 * @param toBody what would be sent for the text that stands in the fields
 * @param more faults that the schema does not know of (screening)
 */
export function bodyResolver<Form extends FieldValues>(
  schema: z.ZodType,
  toBody: (form: Form) => unknown,
  more: (form: Form) => FieldFault[] = () => [],
): Resolver<Form> {
  return (values) => {
    const parsed = schema.safeParse(toBody(values));
    const issues = parsed.success ? [] : parsed.error.issues;
    const faults: FieldFault[] = [
      ...issues.map(({ path, message }) => ({
        path: path.map((part) => (typeof part === 'number' ? part : String(part))),
        message: /^Invalid input/.test(message) ? 'Enter a number' : message,
      })),
      ...more(values),
    ];
    if (faults.length === 0) return { values, errors: {} };
    const errors: Record<string, unknown> = {};
    for (const { path, message } of faults) put(errors, path.length > 0 ? path : ['root'], message);
    return { values: {}, errors: errors as FieldErrors<Form> };
  };
}

/** Sets a fault at a path, unless one stands there or on the way already. */
function put(errors: Record<string, unknown>, path: readonly (string | number)[], message: string): void {
  let at: Record<string | number, unknown> = errors;
  for (const [index, part] of path.entries()) {
    if (index === path.length - 1) at[part] ??= { type: 'fault', message };
    else {
      at[part] ??= typeof path[index + 1] === 'number' ? [] : {};
      at = at[part] as Record<string | number, unknown>;
    }
  }
}
