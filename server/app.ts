import { randomUUID } from 'node:crypto';
import { join } from 'node:path';
import { constants } from 'node:zlib';
import compression from 'compression';
import expressStaticGzip from 'express-static-gzip';
import express, { type Express } from 'express';
import rateLimit from 'express-rate-limit';
import session from 'express-session';
import { pinoHttp } from 'pino-http';
import type { Dependencies } from './dependencies.ts';
import { HttpError, notFound } from './errors.ts';
import { addAlertRoutes } from './features/alerts/routes.ts';
import { addComparisonRoutes } from './features/arrival-models/comparison-routes.ts';
import { levelJob } from './features/arrival-models/level-job.ts';
import { addArrivalModelRoutes } from './features/arrival-models/routes.ts';
import { addAuditLogRoutes } from './features/audit-log/routes.ts';
import { addLinkRoutes } from './features/briefs/link-routes.ts';
import { addDeliveryReportRoute } from './features/briefs/report-route.ts';
import { addRecipientRoutes } from './features/briefs/recipient-routes.ts';
import { addBriefRoutes } from './features/briefs/routes.ts';
import { addInstallationRoutes } from './features/installation/routes.ts';
import { addCalendarFeedRoutes } from './features/calendar-feeds/routes.ts';
import { addJobRoutes } from './features/jobs/routes.ts';
import type { OutlookIssuer } from './features/outlook/issuer.ts';
import { addOutlookRoutes } from './features/outlook/routes.ts';
import { addPeopleRoutes } from './features/people/routes.ts';
import { addScenarioRoutes } from './features/scenarios/routes.ts';
import { makeMetrics } from './features/server-status/metrics.ts';
import { addServerAdministrationRoutes, addServerStatusRoutes } from './features/server-status/routes.ts';
import { addSignInRoutes } from './features/sign-in/routes.ts';
import { addSiteSettingRoutes } from './features/site-settings/routes.ts';
import { addSiteRoutes } from './features/sites/routes.ts';
import { addStaffedBedRoutes } from './features/staffed-beds/routes.ts';
import { addTokenRoutes } from './features/tokens/routes.ts';
import { addTrackRecordRoutes } from './features/track-record/routes.ts';
import { scoreJob } from './features/track-record/score-outlooks.job.ts';
import { addVisitLogRoutes } from './features/visit-logs/routes.ts';
import { addWeekAheadRoutes } from './features/week-ahead/routes.ts';
import { requireAntiForgeryToken } from './http/anti-forgery.ts';
import { limitRequests } from './http/limit-requests.ts';
import { makeErrorHandler } from './http/error-handler.ts';
import { recogniseTokens } from './http/machine-token.ts';
import type { RouteTable } from './http/route.ts';
import { securityHeaders } from './http/security-headers.ts';
import { sessionCookie } from './http/session-cookie.ts';
import type { SessionStore } from './http/session-store.ts';
import { followUse } from './http/session-use.ts';
import { serveClient } from './http/static-client.ts';
import { loggedPath, presentError } from './log.ts';

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
      serializers: {
        req: (req: { id: string; method: string; url: string }) => ({
          id: req.id,
          method: req.method,
          path: loggedPath(req.url),
        }),
        res: (res: { statusCode: number }) => ({ statusCode: res.statusCode }),
        err: presentError,
      },
    }),
  );
  const metrics = makeMetrics(deps);
  app.use(metrics.follow);
  app.use(securityHeaders(config.production));
  if (clientDir !== null) {
    // Compressed at build: at each request it would cost a second of a first view.
    app.use(
      '/assets',
      expressStaticGzip(join(clientDir, 'assets'), {
        enableBrotli: true,
        orderPreference: ['br'],
        index: false,
        serveStatic: { immutable: true, maxAge: '1y' },
      }),
    );
  }
  // Replies are a tenth smaller at 5 than at the middleware's own 4, in no more time; from 7 on it takes long.
  app.use(compression({ brotli: { params: { [constants.BROTLI_PARAM_QUALITY]: 5 } } }));

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
      name: sessionCookie(config.production),
      secret: config.sessionSecret,
      store: sessions,
      resave: false,
      saveUninitialized: false,
      rolling: false,
      cookie: { httpOnly: true, sameSite: 'lax', secure: config.production, path: '/' },
    }),
    requireAntiForgeryToken(config.sessionSecret),
    followUse(sessions, config.idleMinutes * 60),
    limitRequests(config.requestsPerMinute),
  );
  app.use('/api', express.json({ limit: '1mb', strict: true }));

  addServerStatusRoutes(app, routes, deps, metrics);
  addServerAdministrationRoutes(app, routes, deps);
  addSignInRoutes(app, routes, deps, sessions);
  addSiteRoutes(app, routes, deps);
  addOutlookRoutes(app, routes, deps, issuer);
  addWeekAheadRoutes(app, routes, deps);
  // Features meet here: what changes beds or the model asks for a new outlook.
  addStaffedBedRoutes(
    app,
    routes,
    deps,
    async (siteId) => (await issuer.issueOrReport(siteId, 'staffed beds changed')).outlookId,
  );
  addSiteSettingRoutes(
    app,
    routes,
    deps,
    async (siteId) => (await issuer.issueOrReport(siteId, 'settings changed')).outlookId,
  );
  addScenarioRoutes(app, routes, deps, issuer.replications, (siteId) =>
    issuer.issueOrReport(siteId, 'staffed beds changed'),
  );
  addCalendarFeedRoutes(app, routes, deps);
  addComparisonRoutes(app, routes, deps);
  addArrivalModelRoutes(app, routes, deps, async (siteId) => {
    await issuer.issueOrReport(siteId, 'model approved');
  });
  // What a withdrawn log told is un-scored, and leaves the level of the model in use; so does what an outage covers.
  addVisitLogRoutes(app, routes, deps, {
    withdrawn: async (manager, log) => {
      await deps.jobs.enqueue(manager, scoreJob(log.siteId, log.periodFrom, log.periodTo));
      await deps.jobs.enqueue(manager, levelJob(log.siteId));
    },
    gapsChanged: async (manager, siteId) => {
      await deps.jobs.enqueue(manager, levelJob(siteId));
    },
  });
  addTrackRecordRoutes(app, routes, deps);
  addJobRoutes(app, routes, deps);
  addAuditLogRoutes(app, routes, deps);
  addPeopleRoutes(app, routes, deps, sessions);
  addInstallationRoutes(app, routes, deps, async (siteId) => {
    await issuer.issueOrReport(siteId, 'settings changed');
  });
  addTokenRoutes(app, routes, deps);
  addAlertRoutes(app, routes, deps);
  addBriefRoutes(app, routes, deps);
  addRecipientRoutes(app, routes, deps);
  addLinkRoutes(app, routes, deps);
  addDeliveryReportRoute(app, routes, deps);

  app.use(['/api', '/auth', '/mail', '/healthz', '/readyz', '/metrics'], () => {
    throw notFound('This address');
  });
  if (clientDir !== null) serveClient(app, clientDir);
  app.use(() => {
    throw notFound('This address');
  });
  app.use(makeErrorHandler(logger));
  return { express: app, routes };
}
