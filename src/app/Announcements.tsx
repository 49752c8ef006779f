import { lazy, Suspense, useSyncExternalStore } from 'react';
import { announcements, dismiss, onAnnouncement } from '../lib/announce.ts';

// Nothing is told before something was done: its script comes with the first result.
const Toasts = lazy(async () => ({ default: (await import('../components/Toasts.tsx')).Toasts }));

/** Tells results in passing, on every page. */
export function Announcements() {
  const list = useSyncExternalStore(onAnnouncement, announcements);
  return list.length === 0 ? null : (
    <Suspense>
      <Toasts list={list} onGone={dismiss} />
    </Suspense>
  );
}
