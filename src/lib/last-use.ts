const key = 'last-use';
const shareEveryMilliseconds = 5000;
const recentMilliseconds = 60_000;

let here = Date.now();
let shared = 0;

function noteUse(): void {
  here = Date.now();
  if (here - shared < shareEveryMilliseconds) return;
  shared = here;
  try {
    localStorage.setItem(key, String(here));
  } catch {
    // Storage is refused: then each tab counts for itself.
  }
}

for (const kind of ['pointerdown', 'keydown', 'wheel', 'touchstart'] as const) {
  if (typeof window !== 'undefined') window.addEventListener(kind, noteUse, { passive: true, capture: true });
}

/** When this product was last used on this device as the tabs tell each other, milliseconds; 0 if they never did. */
export function sharedLastUse(): number {
  try {
    return Number(localStorage.getItem(key)) || 0;
  } catch {
    return 0;
  }
}

/** When a key or a pointer was last used in any tab of this product, milliseconds of this device's clock. */
export function lastUse(): number {
  const other = sharedLastUse();
  // A clock that was set back must not keep a screen open.
  return other <= Date.now() ? Math.max(here, other) : here;
}

/** True if somebody was here within the last minute: what is asked now is asked by a person, not by the page. */
export function isInUse(): boolean {
  return Date.now() - lastUse() < recentMilliseconds;
}
