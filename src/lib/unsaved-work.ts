import { useEffect, useSyncExternalStore } from 'react';

const held = new Map<symbol, string>();
const listeners = new Set<() => void>();
const tell = () => {
  for (const listener of listeners) listener();
};

/** While `active`, leaving the page asks first. `what` ends the sentence "You have …", for instance "a file that is not loaded yet". */
export function useUnsavedWork(active: boolean, what: string): void {
  useEffect(() => {
    if (!active) return;
    const key = Symbol(what);
    held.set(key, what);
    tell();
    return () => {
      held.delete(key);
      tell();
    };
  }, [active, what]);
}

/** What would be lost by leaving now; null if nothing would. */
export function useWhatIsUnsaved(): string | null {
  return useSyncExternalStore(
    (listener) => {
      listeners.add(listener);
      return () => listeners.delete(listener);
    },
    () => [...held.values()].at(-1) ?? null,
  );
}
