import { signOut as signOutRoute, signOutEverywhere as everywhereRoute } from '../../../shared/api/session.ts';
import { call } from '../../lib/api-client.ts';
import { forgetKept } from '../../lib/kept-on-device.ts';

/** Ends the session at both ends. By fetch, since a form post that is sent on elsewhere is refused by the content policy. */
export async function signOut(): Promise<void> {
  leaveFor((await call(signOutRoute, { kept: 'You are still signed in.' })).redirectTo);
}

/** The same on every device. */
export async function signOutEverywhere(): Promise<void> {
  leaveFor((await call(everywhereRoute, { kept: 'You are still signed in.' })).redirectTo);
}

function leaveFor(redirectTo: string): void {
  // What was typed and read belongs to this person: at a shared workstation the next one must not find it.
  forgetKept();
  try {
    sessionStorage.clear();
  } catch {
    // Storage is refused: then nothing was kept either.
  }
  window.location.assign(redirectTo);
}
