import { findInText, holdsFullName, holdsTitledName } from './find-identifier.ts';
import type { IdentifierKind } from './identifier-kind.ts';

/**
 * Screens a note that a person typed. Ordinary sentences with times, bed numbers and roles pass.
 * @returns the kind of what could identify a person, null if nothing does
 */
export function screenNote(note: string): IdentifierKind | null {
  const found = findInText(note);
  if (found) return found.kind;
  if (/(?<![\w+])\+?\d[\d ().-]{8,}\d(?!\w)/.test(note.replace(/\d{4}-\d{2}-\d{2}/g, ''))) return 'telephone number';
  if (/(?<!\d)\d{7,}(?!\d)/.test(note)) return 'record number';
  if (holdsTitledName(note) || holdsFullName(note)) return 'name';
  return null;
}
