import { Initial1796104800519 } from './1796104800519-Initial.ts';
import { VisitLogMemory1796107539421 } from './1796107539421-VisitLogMemory.ts';
import { TokensAndAlerts1796108003403 } from './1796108003403-TokensAndAlerts.ts';
import { Acknowledgement1796108180497 } from './1796108180497-Acknowledgement.ts';

/** In order of their dates. */
export const migrations = [
  Initial1796104800519,
  VisitLogMemory1796107539421,
  TokensAndAlerts1796108003403,
  Acknowledgement1796108180497,
];
