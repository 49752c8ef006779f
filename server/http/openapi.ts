import { extendZodWithOpenApi, OpenAPIRegistry, OpenApiGeneratorV31 } from '@asteasolutions/zod-to-openapi';
import { z } from 'zod';
import { problem } from '../../shared/api/common.ts';
import type { Contract } from '../../shared/api/contract.ts';

extendZodWithOpenApi(z);

/** The description of the whole API (OpenAPI 3.1), made from the contracts that the server enforces. */
export function describeApi(contracts: readonly Contract[], version: string): object {
  const registry = new OpenAPIRegistry();
  registry.registerComponent('securitySchemes', 'session', { type: 'apiKey', in: 'cookie', name: 'shoalmark' });
  registry.registerComponent('securitySchemes', 'machineToken', { type: 'http', scheme: 'bearer' });
  for (const contract of contracts) {
    const { params, query } = contract;
    registry.registerPath({
      operationId: contract.id,
      method: contract.method,
      path: contract.path.replace(/:(\w+)/g, '{$1}'),
      summary: contract.summary,
      description:
        contract.access === 'public'
          ? 'Open to nobody signed in.'
          : `Needs: ${contract.access}${contract.token ? `, or a machine token of the site for ${contract.token}` : ''}.`,
      ...(contract.access === 'public'
        ? {}
        : { security: [{ session: [] }, ...(contract.token ? [{ machineToken: [] }] : [])] }),
      request: {
        ...(params instanceof z.ZodObject ? { params } : {}),
        ...(query instanceof z.ZodObject ? { query } : {}),
        ...(contract.body ? { body: { content: { 'application/json': { schema: contract.body } } } } : {}),
        ...(contract.streamedBody ? { body: { content: { [contract.streamedBody]: { schema: z.string() } } } } : {}),
      },
      responses: {
        [String(contract.status ?? 200)]: {
          description: 'Success',
          ...(contract.reply instanceof z.ZodUndefined || contract.status === 204
            ? {}
            : { content: { [contract.replyType ?? 'application/json']: { schema: contract.reply } } }),
        },
        default: {
          description: 'A problem (RFC 9457)',
          content: { 'application/problem+json': { schema: problem } },
        },
      },
    });
  }
  return new OpenApiGeneratorV31(registry.definitions).generateDocument({
    openapi: '3.1.0',
    info: {
      title: 'Shoalmark',
      version,
      description:
        'Planning aid. Not for decisions about any individual patient. Writing requests send the header x-csrf-token with the token from /api/session.',
    },
  });
}
