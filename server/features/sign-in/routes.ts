import type { Express, Request } from 'express';
import * as oidc from 'openid-client';
import {
  getSession,
  lockSession,
  signIn,
  signInCallback,
  signOut,
  signOutEverywhere,
} from '../../../shared/api/session.ts';
import type { Dependencies } from '../../dependencies.ts';
import { recordAudit } from '../../http/audit.ts';
import { addRoute, type RouteContext, type RouteTable } from '../../http/route.ts';
import type { SessionStore } from '../../http/session-store.ts';
import { sessionCookie } from '../../http/session-cookie.ts';
import { localPath, problemPage } from '../../http/sign-in-page.ts';
import { isLocked } from '../../http/session-use.ts';
import { addOwnSessionRoutes } from './own-sessions.ts';
import { nameDevice } from './name-device.ts';
import { presentSession } from './present.ts';
import { makeProvider } from './provider.ts';
import { isProviderOutOfOrder } from './provider-fault.ts';
import { readGroups, recognisePerson } from './recognise-person.ts';

const signInMinutes = 15;

/** Sign-in by OpenID Connect: authorization code with PKCE, state and nonce. */
export function addSignInRoutes(app: Express, table: RouteTable, deps: Dependencies, sessions: SessionStore): void {
  const { config, database, logger } = deps;
  const provider = makeProvider(config);
  const redirectUri = `${config.baseUrl}/auth/callback`;

  addRoute(app, table, deps, getSession, ({ req, caller, now }) =>
    presentSession(deps, caller, { sessionId: req.sessionID, locked: isLocked(req) }, now),
  );

  addRoute(app, table, deps, signIn, async ({ req, res, query, now }) => {
    let configuration: oidc.Configuration;
    try {
      configuration = await provider();
    } catch (error) {
      logger.error({ err: error }, 'the identity provider cannot be reached');
      res.redirect(problemPage('unreachable', localPath(query.returnTo)));
      return undefined;
    }
    const codeVerifier = oidc.randomPKCECodeVerifier();
    const state = oidc.randomState();
    const nonce = oidc.randomNonce();
    // A locked session is never opened by a sign-in that the provider still remembers.
    const fresh = query.fresh === '1' || isLocked(req);
    req.session.signIn = { state, nonce, codeVerifier, returnTo: localPath(query.returnTo), fresh, startedAt: now };
    await saveSession(req);
    res.redirect(
      oidc.buildAuthorizationUrl(configuration, {
        redirect_uri: redirectUri,
        scope: 'openid profile email groups',
        code_challenge: await oidc.calculatePKCECodeChallenge(codeVerifier),
        code_challenge_method: 'S256',
        state,
        nonce,
        ...(fresh ? { prompt: 'login', max_age: '0' } : {}),
      }).href,
    );
    return undefined;
  });

  addRoute(app, table, deps, signInCallback, async (context) => {
    const { req, res, now } = context;
    const underWay = req.session.signIn;
    if (!underWay || underWay.startedAt < now - signInMinutes * 60) {
      res.redirect(problemPage('expired', underWay?.returnTo));
      return undefined;
    }
    // An answer counts once, whatever comes of it; one that is not for this sign-in leaves it open.
    if (new URL(req.originalUrl, config.baseUrl).searchParams.get('state') === underWay.state) {
      delete req.session.signIn;
      await saveSession(req);
    }
    let tokens: oidc.TokenEndpointResponse & oidc.TokenEndpointResponseHelpers;
    try {
      // The address is built from the configured one, never from the Host header.
      const current = new URL(req.originalUrl, config.baseUrl);
      tokens = await oidc.authorizationCodeGrant(await provider(), current, {
        pkceCodeVerifier: underWay.codeVerifier,
        expectedState: underWay.state,
        expectedNonce: underWay.nonce,
        idTokenExpected: true,
        ...(underWay.fresh ? { maxAge: signInMinutes * 60 } : {}),
      });
    } catch (error) {
      const outOfOrder = isProviderOutOfOrder(error);
      if (outOfOrder) logger.error({ err: error }, 'the identity provider did not finish a sign-in');
      else logger.warn({ err: error }, 'a sign-in was refused');
      res.redirect(problemPage(outOfOrder ? 'unreachable' : 'refused', underWay.returnTo));
      return undefined;
    }
    const claims = tokens.claims();
    if (!claims) throw new Error('the identity provider sent no id token');
    const email = typeof claims.email === 'string' ? claims.email : '';
    const person = await database.write(async (manager) => {
      const recognised = await recognisePerson(
        manager,
        {
          issuer: claims.iss,
          subject: claims.sub,
          name: typeof claims.name === 'string' && claims.name !== '' ? claims.name : email || claims.sub,
          email,
          emailVerified: claims.email_verified === true,
          groups: readGroups(claims.groups),
        },
        now,
      );
      const caller = { person: recognised, rolesAt: new Map(), installationRoles: [] };
      await recordAudit(manager, { ...context, caller }, 'person.signed-in', recognised.id);
      return recognised;
    });
    // A new session id at sign-in, so that one planted before is worth nothing.
    await new Promise<void>((resolve, reject) => {
      req.session.regenerate((error: unknown) => {
        if (error) reject(error instanceof Error ? error : new Error('the session could not be renewed'));
        else resolve();
      });
    });
    req.session.personId = person.id;
    req.session.signedInAt = now;
    req.session.usedAt = now;
    req.session.idToken = tokens.id_token ?? '';
    req.session.device = nameDevice(req.get('user-agent'));
    req.session.address = context.address;
    await saveSession(req);
    res.redirect(underWay.returnTo);
    return undefined;
  });

  const leave = async ({ req, res }: RouteContext): Promise<{ redirectTo: string }> => {
    const idToken = req.session.idToken;
    await new Promise<void>((resolve, reject) => {
      req.session.destroy((error: unknown) => {
        if (error) reject(error instanceof Error ? error : new Error('the session could not be ended'));
        else resolve();
      });
    });
    res.clearCookie(sessionCookie(config.production), { path: '/', secure: config.production });
    let redirectTo = '/sign-in';
    try {
      const configuration = await provider();
      if (configuration.serverMetadata().end_session_endpoint !== undefined) {
        redirectTo = oidc.buildEndSessionUrl(configuration, {
          post_logout_redirect_uri: `${config.baseUrl}/sign-in`,
          ...(idToken ? { id_token_hint: idToken } : {}),
        }).href;
      }
    } catch (error) {
      logger.warn({ err: error }, 'the identity provider could not be asked to end its session');
    }
    return { redirectTo };
  };

  addRoute(app, table, deps, signOut, async (context) => {
    await database.write((manager) =>
      recordAudit(manager, context, 'person.signed-out', context.caller?.person.id ?? ''),
    );
    return leave(context);
  });

  addRoute(app, table, deps, signOutEverywhere, async (context) => {
    const personId = context.caller?.person.id ?? '';
    await sessions.endAllOf(personId, (manager, count) =>
      recordAudit(manager, context, 'person.signed-out-everywhere', personId, { sessions: count }),
    );
    return leave(context);
  });

  addOwnSessionRoutes(app, table, deps, sessions);

  addRoute(app, table, deps, lockSession, async ({ req }) => {
    req.session.usedAt = 0;
    await saveSession(req);
    return null;
  });
}

function saveSession(req: Request): Promise<void> {
  return new Promise((resolve, reject) => {
    req.session.save((error: unknown) => {
      if (error) reject(error instanceof Error ? error : new Error('the session could not be stored'));
      else resolve();
    });
  });
}
