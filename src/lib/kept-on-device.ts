const prefix = 'kept:';
const keyOf = (personId: string, name: string) => `${prefix}${personId}:${name}`;

/** What was kept and when, this device's clock, milliseconds. */
export interface Kept {
  at: number;
  value: unknown;
}

/**
 * Keeps on this device what one person may read again while the server cannot be reached. Whatever is kept goes with
 * the session: see `forgetKept`. A device that refuses or has no room keeps nothing.
 */
export function keepOnDevice(personId: string, name: string, value: unknown, at: number): void {
  const key = keyOf(personId, name);
  try {
    localStorage.setItem(key, JSON.stringify({ at, value }));
  } catch {
    // Half of an older and a newer state would be worse than none.
    try {
      localStorage.removeItem(key);
    } catch {
      // Storage is refused altogether.
    }
  }
}

/** What was kept for a person under a name; null if there is nothing. Its shape is for the caller to check. */
export function readKept(personId: string, name: string): Kept | null {
  try {
    const kept = JSON.parse(localStorage.getItem(keyOf(personId, name)) ?? 'null') as Kept | null;
    return kept !== null && typeof kept.at === 'number' ? kept : null;
  } catch {
    return null;
  }
}

/** Forgets everything that is kept on this device, but for one person's if an id is given. */
export function forgetKept(exceptPersonId?: string): void {
  try {
    const stays = exceptPersonId === undefined ? null : keyOf(exceptPersonId, '');
    for (const key of Object.keys(localStorage)) {
      if (key.startsWith(prefix) && !(stays !== null && key.startsWith(stays))) localStorage.removeItem(key);
    }
  } catch {
    // Storage is refused: then nothing was kept either.
  }
}
