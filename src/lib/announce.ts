/** A result that is told in passing, wherever on the page the person is. */
export interface Announcement {
  id: number;
  /** "Fair, Sat 28 Aug 2027, was taken out." */
  text: string;
  /** Puts back what was there before, where that can be done. */
  undo?: () => void;
}

let next = 1;
const waiting: Announcement[] = [];
const listeners = new Set<() => void>();
let snapshot: readonly Announcement[] = [];

function publish(): void {
  snapshot = [...waiting];
  for (const listener of listeners) listener();
}

/** Tells a result; it goes by itself, later if it can be undone. */
export function announce(text: string, undo?: () => void): void {
  waiting.push({ id: next, text, ...(undo ? { undo } : {}) });
  next += 1;
  publish();
}

/** Takes an announcement away, read or not. */
export function dismiss(id: number): void {
  const at = waiting.findIndex((one) => one.id === id);
  if (at < 0) return;
  waiting.splice(at, 1);
  publish();
}

export function announcements(): readonly Announcement[] {
  return snapshot;
}

/** Calls the listener whenever there is something new to tell; returns how to stop. */
export function onAnnouncement(listener: () => void): () => void {
  listeners.add(listener);
  return () => listeners.delete(listener);
}
