import { z } from 'zod';
import { defineContract } from './contract.ts';

export const healthz = defineContract({
  id: 'healthz',
  method: 'get',
  path: '/healthz',
  access: 'public',
  summary: 'The process is alive.',
  reply: z.object({ alive: z.literal(true) }),
});

export const readyz = defineContract({
  id: 'readyz',
  method: 'get',
  path: '/readyz',
  access: 'public',
  summary: 'The database is migrated and can be written; 503 otherwise.',
  reply: z.object({ ready: z.boolean() }),
});

export const apiDescription = defineContract({
  id: 'apiDescription',
  method: 'get',
  path: '/api/openapi.json',
  access: 'public',
  summary: 'This description (OpenAPI 3.1).',
  reply: z.record(z.string(), z.unknown()),
});
