import { createServer } from 'node:http';
import type { IncomingMessage, ServerResponse } from 'node:http';
import type { AddressInfo } from 'node:net';
import type { default as Provider, Configuration } from 'oidc-provider';
import { makeExpiringStore } from './expiring-store.ts';
import type { DemoAccount } from './farrowmere-accounts.ts';
import { loadOidcKeys } from './oidc-keys.ts';
import { errorPage, signedOutPage, signInPage, signOutPage, signOutScript } from './oidc-pages.ts';
import { fontPath, nunitoSans, pagePolicy } from './page-shell.ts';

export interface OidcIssuerOptions {
  /** Port on the loopback address; 0 takes a free one. */
  port: number;
  clientId: string;
  clientSecret: string;
  redirectUris: string[];
  postLogoutRedirectUris: string[];
  accounts: readonly DemoAccount[];
  /** Where the keys are kept between starts. */
  dataDir: string;
  /** The password of every account. */
  password: string;
}

export interface OidcIssuer {
  /** The issuer's identifier, for OIDC_ISSUER_URL. */
  url: string;
  close(): Promise<void>;
}

const loopback = '127.0.0.1';
const bodyLimit = 4096;

/**
 * Starts the demo's stand-in for a hospital's OpenID Connect provider on the loopback address: authorization
 * code with PKCE, an own form with the fields `username` and `password`, and RP-initiated logout.
 * The ID token carries sub, name, email, email_verified, groups and auth_time.
 */
export async function startOidcIssuer(options: OidcIssuerOptions): Promise<OidcIssuer> {
  const server = createServer();
  await new Promise<void>((resolve, reject) => {
    server.once('error', reject);
    server.listen(options.port, loopback, resolve);
  });
  const url = `http://${loopback}:${String((server.address() as AddressInfo).port)}`;
  const formTargets = [
    ...new Set([...options.redirectUris, ...options.postLogoutRedirectUris].map((uri) => new URL(uri).origin)),
  ];

  const ProviderClass = await importProvider();
  const provider = new ProviderClass(url, configure(options, formTargets));
  const answer = provider.callback();

  server.on('request', (req, res) => {
    const path = new URL(req.url ?? '/', url).pathname;
    if (path === fontPath && req.method === 'GET') {
      res.writeHead(200, { 'content-type': 'font/woff2', 'cache-control': 'public, max-age=86400' }).end(nunitoSans());
    } else if (path.startsWith('/interaction/')) {
      handleInteraction(provider, options, formTargets, req, res).catch(() => {
        if (!res.headersSent)
          sendPage(res, 400, errorPage('This sign-in has expired or was started elsewhere.'), formTargets);
      });
    } else {
      void answer(req, res);
    }
  });

  return {
    url,
    close: () =>
      new Promise((resolve, reject) => {
        server.close((error) => {
          if (error) reject(error);
          else resolve();
        });
        server.closeAllConnections();
      }),
  };
}

/** The package says on the console that it would rather run on a newer Node; the flows used here were tested on this one. */
async function importProvider(): Promise<typeof Provider> {
  const warn = console.warn;
  console.warn = (...parts: unknown[]) => {
    if (!String(parts[0]).includes('Unsupported runtime')) warn(...parts);
  };
  try {
    return (await import('oidc-provider')).default;
  } finally {
    console.warn = warn;
  }
}

function configure(options: OidcIssuerOptions, formTargets: string[]): Configuration {
  const keys = loadOidcKeys(options.dataDir);
  return {
    adapter: makeExpiringStore(() => Math.floor(Date.now() / 1000)),
    clients: [
      {
        client_id: options.clientId,
        client_secret: options.clientSecret,
        redirect_uris: options.redirectUris,
        post_logout_redirect_uris: options.postLogoutRedirectUris,
        grant_types: ['authorization_code'],
        response_types: ['code'],
        require_auth_time: true,
      },
    ],
    jwks: { keys: keys.signingKeys },
    cookies: { keys: keys.cookieKeys },
    scopes: ['openid', 'profile', 'email', 'groups'],
    claims: { openid: ['sub'], profile: ['name'], email: ['email', 'email_verified'], groups: ['groups'] },
    // Otherwise name, e-mail and groups would be at the userinfo endpoint only.
    conformIdTokenClaims: false,
    pkce: { required: () => true },
    ttl: { AccessToken: 3600, AuthorizationCode: 60, Grant: 43_200, IdToken: 3600, Interaction: 3600, Session: 43_200 },
    interactions: { url: (_ctx, interaction) => `/interaction/${interaction.uid}` },
    features: {
      devInteractions: { enabled: false },
      rpInitiatedLogout: {
        enabled: true,
        logoutSource: (ctx, form) => {
          ctx.set('content-security-policy', pagePolicy({ formTargets, script: signOutScript }));
          ctx.body = signOutPage(form);
        },
        postLogoutSuccessSource: (ctx) => {
          ctx.set('content-security-policy', pagePolicy());
          ctx.body = signedOutPage();
        },
      },
    },
    renderError: (ctx, out) => {
      ctx.type = 'html';
      ctx.set('content-security-policy', pagePolicy());
      ctx.body = errorPage(out.error_description ?? out.error);
    },
    findAccount: (_ctx, sub) => {
      const account = options.accounts.find((candidate) => candidate.username === sub);
      return account && { accountId: sub, claims: () => ({ ...claimsOf(account) }) };
    },
    // The hospital has agreed to the product once for all its people: without this each is asked for consent.
    loadExistingGrant: async (ctx) => {
      const grant = new ctx.oidc.provider.Grant({
        clientId: ctx.oidc.client?.clientId,
        accountId: ctx.oidc.session?.accountId,
      });
      grant.addOIDCScope([...ctx.oidc.requestParamScopes].join(' '));
      await grant.save();
      return grant;
    },
  };
}

function claimsOf(account: DemoAccount) {
  const groups = [
    ...account.siteRoles.map(({ siteId, role }) => `${siteId}:${role}`),
    ...account.installationRoles.map((role) => `installation:${role}`),
  ];
  return { sub: account.username, name: account.name, email: account.email, email_verified: true, groups };
}

async function handleInteraction(
  provider: Provider,
  options: OidcIssuerOptions,
  formTargets: string[],
  req: IncomingMessage,
  res: ServerResponse,
): Promise<void> {
  const interaction = await provider.interactionDetails(req, res);
  const page = { action: `/interaction/${interaction.uid}`, accounts: options.accounts, password: options.password };
  if (req.method !== 'POST') {
    sendPage(res, 200, signInPage({ ...page, username: '', problem: null }), formTargets);
    return;
  }
  const form = new URLSearchParams(await readBody(req));
  const username = (form.get('username') ?? '').trim().toLowerCase();
  const account = options.accounts.find((candidate) => candidate.username === username);
  if (!account || form.get('password') !== options.password) {
    const problem = 'User name or password is wrong. Try again.';
    sendPage(res, 200, signInPage({ ...page, username, problem }), formTargets);
    return;
  }
  if (interaction.session && interaction.session.accountId !== account.username) {
    // Another person signs in at a shared workstation: end the former session here, so that the provider
    // does not show a page of its own that needs a script to go on.
    await (await provider.Session.findByUid(interaction.session.uid))?.destroy();
    delete interaction.session;
    await interaction.save(interaction.exp - Math.floor(Date.now() / 1000));
  }
  await provider.interactionFinished(
    req,
    res,
    { login: { accountId: account.username } },
    { mergeWithLastSubmission: false },
  );
}

function sendPage(res: ServerResponse, status: number, html: string, formTargets: string[]): void {
  res
    .writeHead(status, {
      'content-type': 'text/html; charset=utf-8',
      'cache-control': 'no-store',
      'content-security-policy': pagePolicy({ formTargets }),
      'referrer-policy': 'no-referrer',
      'x-content-type-options': 'nosniff',
    })
    .end(html);
}

async function readBody(req: IncomingMessage): Promise<string> {
  let body = '';
  req.setEncoding('utf8');
  for await (const chunk of req) {
    body += String(chunk);
    if (body.length > bodyLimit) throw new RangeError('form too large');
  }
  return body;
}
