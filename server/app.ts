import { randomUUID } from 'node:crypto';
import { join } from 'node:path';
import compression from 'compression';
import express, { type Express } from 'express';
import rateLimit from 'express-rate-limit';
import session from 'express-session';
import { pinoHttp } from 'pino-http';
import type { Dependencies } from './dependencies.ts';
import { HttpError, notFound } from './errors.ts';
import { addAlertRoutes } from './features/alerts/routes.ts';
import { addArrivalModelRoutes } from './features/arrival-models/routes.ts';
import { addJobRoutes } from './features/jobs/routes.ts';
import type { OutlookIssuer } from './features/outlook/issuer.ts';
import { addOutlookRoutes } from './features/outlook/routes.ts';
import { addServerStatusRoutes } from './features/server-status/routes.ts';
import { addSignInRoutes } from './features/sign-in/routes.ts';
import { addSiteRoutes } from './features/sites/routes.ts';
import { addStaffedBedRoutes } from './features/staffed-beds/routes.ts';
import { addTokenRoutes } from './features/tokens/routes.ts';
import { addVisitLogRoutes } from './features/visit-logs/routes.ts';
import { requireAntiForgeryToken } from './http/anti-forgery.ts';
import { makeErrorHandler } from './http/error-handler.ts';
import { recogniseTokens } from './http/machine-token.ts';
import type { RouteTable } from './http/route.ts';
import { securityHeaders } from './http/security-headers.ts';
import type { SessionStore } from './http/session-store.ts';
import { serveClient } from './http/static-client.ts';

export interface App {
  express: Express;
  /** Every route under contract, in the order of registration. */
  routes: RouteTable;
}

/**
 * Makes the application, not listening.
 * @param clientDir folder of the built client; without it only the API answers.
 */
export function createApp(
  deps: Dependencies,
  issuer: OutlookIssuer,
  sessions: SessionStore,
  clientDir: string | null,
): App {
  const { config, logger } = deps;
  const app = express();
  const routes: RouteTable = { contracts: [] };
  app.disable('x-powered-by');
  app.set('trust proxy', config.trustProxy);
  app.set('query parser', 'simple');

  app.use(
    pinoHttp({
      logger,
      genReqId: (_req, res) => {
        const id = randomUUID();
        res.setHeader('x-request-id', id);
        return id;
      },
      customLogLevel: (_req, res, error) =>
        error || res.statusCode >= 500 ? 'error' : res.statusCode >= 400 ? 'info' : 'debug',
      // Paths only: a query may hold a file's name.
      serializers: {
        req: (req: { id: string; method: string; url: string }) => ({
          id: req.id,
          method: req.method,
          path: req.url.split('?')[0],
        }),
        res: (res: { statusCode: number }) => ({ statusCode: res.statusCode }),
      },
    }),
  );
  app.use(securityHeaders(config.production));
  app.use(compression());
  if (clientDir !== null)
    app.use('/assets', express.static(join(clientDir, 'assets'), { immutable: true, maxAge: '1y' }));

  app.use(
    '/auth',
    rateLimit({
      windowMs: 60_000,
      // A whole hospital signs in from behind one address at the start of a shift.
      limit: 600,
      standardHeaders: 'draft-8',
      legacyHeaders: false,
      validate: { xForwardedForHeader: false },
      handler: (_req, _res, next) => {
        next(
          new HttpError(429, 'Too many requests', 'Too many sign-ins from this address within a minute.', {
            next: 'Wait a minute and try again.',
          }),
        );
      },
    }),
  );
  app.use('/api', recogniseTokens(deps));
  app.use(
    ['/api', '/auth'],
    session({
      name: 'shoalmark',
      secret: config.sessionSecret,
      store: sessions,
      resave: false,
      saveUninitialized: false,
      rolling: false,
      unset: 'destroy',
      cookie: { httpOnly: true, sameSite: 'lax', secure: config.production, path: '/' },
    }),
    requireAntiForgeryToken(config.sessionSecret),
  );
  app.use('/api', express.json({ limit: '1mb', strict: true }));

  addServerStatusRoutes(app, routes, deps);
  addSignInRoutes(app, routes, deps);
  addSiteRoutes(app, routes, deps);
  addOutlookRoutes(app, routes, deps, issuer);
  // Features meet here: what changes beds or the model asks for a new outlook.
  addStaffedBedRoutes(
    app,
    routes,
    deps,
    async (siteId) => (await issuer.issueOrReport(siteId, 'staffed beds changed')).outlookId,
  );
  addArrivalModelRoutes(app, routes, deps, async (siteId) => {
    await issuer.issueOrReport(siteId, 'model approved');
  });
  addVisitLogRoutes(app, routes, deps);
  addJobRoutes(app, routes, deps);
  addTokenRoutes(app, routes, deps);
  addAlertRoutes(app, routes, deps);

  app.use(['/api', '/auth', '/healthz', '/readyz'], () => {
    throw notFound('This address');
  });
  if (clientDir !== null) serveClient(app, clientDir);
  app.use(() => {
    throw notFound('This address');
  });
  app.use(makeErrorHandler(logger));
  return { express: app, routes };
}
