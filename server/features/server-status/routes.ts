import type { Express } from 'express';
import { apiDescription, healthz, readyz } from '../../../shared/api/health.ts';
import type { Dependencies } from '../../dependencies.ts';
import { HttpError } from '../../errors.ts';
import { describeApi } from '../../http/openapi.ts';
import { addRoute, type RouteTable } from '../../http/route.ts';
import { softwareVersion } from '../../software-version.ts';

/** Whether the server lives and can work, and the description of its API. */
export function addServerStatusRoutes(app: Express, table: RouteTable, deps: Dependencies): void {
  addRoute(app, table, deps, healthz, () => Promise.resolve({ alive: true as const }));

  addRoute(app, table, deps, readyz, async () => {
    try {
      // A write that changes nothing still needs the write lock and a writable file.
      await deps.database.write((manager) => manager.query('DELETE FROM session WHERE sid = ?', ['']));
      return { ready: true };
    } catch (error) {
      deps.logger.error({ err: error }, 'the database cannot be written');
      throw new HttpError(503, 'Not ready', 'The database cannot be written.', { next: 'See the server’s log.' });
    }
  });

  let description: object | null = null;
  addRoute(app, table, deps, apiDescription, () => {
    description ??= describeApi(table.contracts, softwareVersion);
    return Promise.resolve(description as Record<string, unknown>);
  });
}
