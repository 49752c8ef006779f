import { Initial1796104800519 } from './1796104800519-Initial.ts';
import { VisitLogMemory1796107539421 } from './1796107539421-VisitLogMemory.ts';

/** In order of their dates. */
export const migrations = [Initial1796104800519, VisitLogMemory1796107539421];
