import { resolve } from 'node:path';
import { z } from 'zod';
import { ConfigError } from './errors.ts';

/** Everything an operator may set. This module is the only reader of the environment. */
export interface Config {
  production: boolean;
  host: string;
  port: number;
  dataDir: string;
  baseUrl: string;
  /** Express "trust proxy" setting: hops or addresses; false without a proxy. */
  trustProxy: number | string | false;
  oidc: { issuerUrl: string; clientId: string; clientSecret: string };
  sessionSecret: string;
  smtpUrl: string | null;
  mailFrom: string;
  logLevel: 'fatal' | 'error' | 'warn' | 'info' | 'debug' | 'trace' | 'silent';
  /** Whom a person without a role asks. */
  administratorContact: string;
  /** Worker threads for fits and simulation. */
  threads: number;
  /** Seconds to add to the clock; only outside production, for journeys. */
  clockOffset: number;
}

const port = z.coerce.number().int().min(1).max(65_535);
const webUrl = z.url({ protocol: /^https?$/ }).transform((url) => url.replace(/\/$/, ''));

const schema = z.object({
  HOST: z.string().min(1).default('127.0.0.1'),
  PORT: port.default(4310),
  DATA_DIR: z.string().min(1).optional(),
  BASE_URL: webUrl.optional(),
  TRUST_PROXY: z.string().optional(),
  OIDC_ISSUER_URL: webUrl,
  OIDC_CLIENT_ID: z.string().min(1),
  OIDC_CLIENT_SECRET: z.string().min(1),
  SESSION_SECRET: z.string().min(32, 'at least 32 characters'),
  SMTP_URL: z.url({ protocol: /^smtps?$/ }).optional(),
  MAIL_FROM: z.string().min(3).default('Shoalmark <shoalmark@localhost>'),
  LOG_LEVEL: z.enum(['fatal', 'error', 'warn', 'info', 'debug', 'trace', 'silent']).default('info'),
  ADMINISTRATOR_CONTACT: z.string().min(1).max(200).default('the administrator of this installation'),
  THREADS: z.coerce.number().int().min(1).max(64).default(2),
  CLOCK_OFFSET: z.coerce.number().int().default(0),
});

/** Values that the demo uses and that a production start refuses. */
export const demoSecrets = [
  'shoalmark-demo-session-secret-not-for-production',
  'shoalmark-demo-client-secret',
] as const;

/**
 * Reads the configuration.
 * @throws ConfigError with one line naming every wrong or missing value.
 */
export function readConfig(env: Record<string, string | undefined>, { production }: { production: boolean }): Config {
  const given = Object.fromEntries(Object.entries(env).filter(([, value]) => value !== undefined && value !== ''));
  const parsed = schema.safeParse(given);
  if (!parsed.success) {
    const faults = parsed.error.issues.map((issue) => {
      const name = String(issue.path[0]);
      return `${name} ${name in given ? `is wrong (${issue.message})` : 'is missing'}`;
    });
    throw new ConfigError(`Cannot start: ${faults.join('; ')}. README.md lists every setting.`);
  }
  const value = parsed.data;
  const baseUrl =
    value.BASE_URL ?? `http://${value.HOST.includes(':') ? `[${value.HOST}]` : value.HOST}:${String(value.PORT)}`;
  if (production) {
    const faults: string[] = [];
    for (const name of ['SESSION_SECRET', 'OIDC_CLIENT_SECRET'] as const) {
      if ((demoSecrets as readonly string[]).includes(value[name])) faults.push(`${name} is the demo's`);
    }
    if (new Set(value.SESSION_SECRET).size < 8) faults.push('SESSION_SECRET is too plain');
    if (value.BASE_URL === undefined) faults.push('BASE_URL is missing');
    else if (!baseUrl.startsWith('https://'))
      faults.push('BASE_URL must begin with https:// (session cookies are sent over TLS only)');
    if (!value.OIDC_ISSUER_URL.startsWith('https://')) faults.push('OIDC_ISSUER_URL must begin with https://');
    if ('CLOCK_OFFSET' in given) faults.push('CLOCK_OFFSET is for tests only');
    if (faults.length > 0) throw new ConfigError(`Cannot start: ${faults.join('; ')}. README.md lists every setting.`);
  }
  return {
    production,
    host: value.HOST,
    port: value.PORT,
    dataDir: readDataDir(env),
    baseUrl,
    trustProxy: readTrustProxy(value.TRUST_PROXY),
    oidc: {
      issuerUrl: value.OIDC_ISSUER_URL,
      clientId: value.OIDC_CLIENT_ID,
      clientSecret: value.OIDC_CLIENT_SECRET,
    },
    sessionSecret: value.SESSION_SECRET,
    smtpUrl: value.SMTP_URL ?? null,
    mailFrom: value.MAIL_FROM,
    logLevel: value.LOG_LEVEL,
    administratorContact: value.ADMINISTRATOR_CONTACT,
    threads: value.THREADS,
    clockOffset: value.CLOCK_OFFSET,
  };
}

function readTrustProxy(text: string | undefined): number | string | false {
  if (text === undefined || text === 'false' || text === '0') return false;
  const hops = Number(text);
  return Number.isInteger(hops) ? hops : text;
}

/** The data folder alone, for commands that need nothing else. */
export function readDataDir(env: Record<string, string | undefined>): string {
  return resolve(env.DATA_DIR === undefined || env.DATA_DIR === '' ? './data' : env.DATA_DIR);
}
