import { Initial1796104800519 } from './1796104800519-Initial.ts';

/** In order of their dates. */
export const migrations = [Initial1796104800519];
