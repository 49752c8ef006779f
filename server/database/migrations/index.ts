import { Initial1796102262155 } from './1796102262155-Initial.ts';

/** In order of their dates. */
export const migrations = [Initial1796102262155];
