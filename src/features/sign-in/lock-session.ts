import { lockSession as lockRoute } from '../../../shared/api/session.ts';
import { call } from '../../lib/api-client.ts';

/** Locks the session at the server: whoever comes next has to sign in afresh. */
export async function lockSession(): Promise<void> {
  await call(lockRoute);
}
