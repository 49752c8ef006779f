import { findIdentifier } from './find-identifier.ts';
import type { IdentifierKind } from './identifier-kind.ts';

/** A value seen fewer times than this in a whole file belongs to a person rather than to a place. */
export const rareBelow = 5;
const mostKept = 2000;

/**
 * Collects the values of one column that are not what the column should hold, and says at the end
 * whether any could identify a patient. Each distinct value is looked at once.
 */
export class ValueTally {
  private readonly seen = new Map<string, { rows: number; kind: IdentifierKind | null; sure: boolean }>();
  private readonly now: number;
  private readonly found = new Map<IdentifierKind, number>();
  private overflow = 0;

  /** @param now UTC seconds, see findIdentifier */
  constructor(now: number) {
    this.now = now;
  }

  add(value: string): void {
    const known = this.seen.get(value);
    if (known) {
      known.rows += 1;
      return;
    }
    const finding = findIdentifier(value, this.now);
    if (this.seen.size < mostKept) {
      this.seen.set(value, { rows: 1, kind: finding?.kind ?? null, sure: finding?.certainty === 'sure' });
      return;
    }
    this.overflow += 1;
    if (finding) this.found.set(finding.kind, (this.found.get(finding.kind) ?? 0) + 1);
  }

  /** True when there were more different values than are kept: a code or a text for each patient, not a list of places. */
  get tooMany(): boolean {
    return this.overflow > 0;
  }

  /** Kinds found with the number of rows, most first. */
  identifiers(): { kind: IdentifierKind; rows: number }[] {
    const total = new Map(this.found);
    for (const { rows, kind, sure } of this.seen.values()) {
      if (kind !== null && (sure || rows < rareBelow)) total.set(kind, (total.get(kind) ?? 0) + rows);
    }
    return [...total].map(([kind, rows]) => ({ kind, rows })).sort((a, b) => b.rows - a.rows);
  }
}
