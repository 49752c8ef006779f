import { z } from 'zod';
import { defineContract } from './contract.ts';
import { id, instant, siteParams } from './common.ts';

/** Censuses compared at most, the newest of the log's time. */
export const mostCompared = 60;

export const getVisitLogPresence = defineContract({
  id: 'getVisitLogPresence',
  method: 'get',
  path: '/api/sites/:siteId/visit-logs/:logId/presence',
  access: 'visit-log:read',
  summary:
    'Present by the logs against the censuses entered in the time for which this log counts: the newest 60 within eight weeks, newest first.',
  params: siteParams.extend({ logId: id }),
  reply: z.object({
    compared: z.array(
      z.object({
        takenAt: instant,
        areaId: id,
        name: z.string(),
        counted: z.int(),
        inLog: z.int(),
      }),
    ),
  }),
});
