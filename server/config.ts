import { isIP } from 'node:net';
import { join, resolve } from 'node:path';
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
  /** Minutes without use after which a session locks: unlocking is a fresh sign-in. */
  idleMinutes: number;
  /** Hours after which a session ends however much it is used. */
  sessionHours: number;
  /** Requests that one session (or, signed out, one address) may make within a minute. */
  requestsPerMinute: number;
  /** Lets the mail server pass on what comes back; without it that answers 404. */
  deliveryReportToken: string | null;
  /** Opens /metrics; without it that answers 404. */
  metricsToken: string | null;
  /** Where backups go; null: the folder backups in the data folder. */
  backupDir: string | null;
  /** Hours between backups; 0: none by the clock. */
  backupEveryHours: number;
  /** Backups that are kept; older ones are deleted. */
  backupKeep: number;
  /** Seconds to add to the clock; only outside production, for journeys. */
  clockOffset: number;
}

const port = z.coerce.number().int().min(1).max(65_535);
const webUrl = z.url({ protocol: /^https?$/ }).transform((url) => url.replace(/\/$/, ''));
/** Our own paths are absolute: they cannot be put below another. */
const origin = webUrl.refine((url) => new URL(url).origin === url, 'scheme, host and port only, without a path');

const schema = z.object({
  HOST: z.string().min(1).default('127.0.0.1'),
  PORT: port.default(4310),
  DATA_DIR: z.string().min(1).optional(),
  BASE_URL: origin.optional(),
  TRUST_PROXY: z
    .string()
    .refine(isTrustProxy, 'a number of proxies, their addresses or subnets with commas between, loopback, or false')
    .optional(),
  OIDC_ISSUER_URL: webUrl,
  OIDC_CLIENT_ID: z.string().min(1),
  OIDC_CLIENT_SECRET: z.string().min(1),
  SESSION_SECRET: z.string().min(32, 'at least 32 characters'),
  SMTP_URL: z.url({ protocol: /^smtps?$/ }).optional(),
  MAIL_FROM: z.string().min(3).default('Shoalmark <shoalmark@localhost>'),
  LOG_LEVEL: z.enum(['fatal', 'error', 'warn', 'info', 'debug', 'trace', 'silent']).default('info'),
  ADMINISTRATOR_CONTACT: z.string().min(1).max(200).default('the administrator of this installation'),
  THREADS: z.coerce.number().int().min(1).max(64).default(2),
  IDLE_MINUTES: z.coerce.number().int().min(1).max(720).default(15),
  SESSION_HOURS: z.coerce.number().int().min(1).max(24).default(12),
  REQUESTS_PER_MINUTE: z.coerce.number().int().min(60).max(1_000_000).default(1200),
  DELIVERY_REPORT_TOKEN: z.string().min(32, 'at least 32 characters').optional(),
  METRICS_TOKEN: z.string().min(32, 'at least 32 characters').optional(),
  BACKUP_DIR: z.string().min(1).optional(),
  BACKUP_EVERY_HOURS: z.coerce.number().int().min(0).max(720).default(24),
  BACKUP_KEEP: z.coerce.number().int().min(1).max(1000).default(14),
  CLOCK_OFFSET: z.coerce.number().int().default(0),
});

/** Values that the demo uses and that a production start refuses. */
export const demoSecrets = [
  'shoalmark-demo-session-secret-not-for-production',
  'shoalmark-demo-client-secret',
  'shoalmark-demo-delivery-reports-not-for-production',
] as const;

/**
 * Reads the configuration.
 * @throws ConfigError with one line naming every wrong or missing value.
 */
export function readConfig(env: Record<string, string | undefined>, { production }: { production: boolean }): Config {
  const given = Object.fromEntries(Object.entries(env).filter(([, value]) => value !== undefined && value !== ''));
  const parsed = schema.safeParse(given);
  const faults = parsed.success
    ? []
    : parsed.error.issues.map((issue) => {
        const name = String(issue.path[0]);
        return `${name} ${name in given ? `is wrong (${issue.message})` : 'is missing'}`;
      });
  if (production) faults.push(...productionFaults(given, faults));
  if (!parsed.success || faults.length > 0) {
    throw new ConfigError(`Cannot start: ${faults.join('; ')}. README.md lists every setting.`);
  }
  const value = parsed.data;
  const baseUrl =
    value.BASE_URL ?? `http://${value.HOST.includes(':') ? `[${value.HOST}]` : value.HOST}:${String(value.PORT)}`;
  return {
    production,
    host: value.HOST,
    port: value.PORT,
    dataDir: readDataDir(env),
    baseUrl,
    // Production speaks plain HTTP to a proxy that ends TLS; unless told otherwise it is on the same machine.
    trustProxy: readTrustProxy(value.TRUST_PROXY ?? (production ? 'loopback' : 'false')),
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
    idleMinutes: value.IDLE_MINUTES,
    sessionHours: value.SESSION_HOURS,
    requestsPerMinute: value.REQUESTS_PER_MINUTE,
    deliveryReportToken: value.DELIVERY_REPORT_TOKEN ?? null,
    metricsToken: value.METRICS_TOKEN ?? null,
    backupDir: value.BACKUP_DIR === undefined ? null : resolve(value.BACKUP_DIR),
    backupEveryHours: value.BACKUP_EVERY_HOURS,
    backupKeep: value.BACKUP_KEEP,
    clockOffset: value.CLOCK_OFFSET,
  };
}

/** What a production start refuses besides what is wrong anywhere; a setting that is faulty already is not named twice. */
function productionFaults(given: Record<string, string | undefined>, known: readonly string[]): string[] {
  const faults: string[] = [];
  const sound = (name: string) => !known.some((fault) => fault.startsWith(`${name} `));
  const refuse = (name: string, why: string) => {
    if (sound(name)) faults.push(`${name} ${why}`);
  };
  const { SESSION_SECRET = '', OIDC_CLIENT_SECRET = '', BASE_URL, OIDC_ISSUER_URL = '' } = given;
  const isDemos = (secret: string) => (demoSecrets as readonly string[]).includes(secret);
  if (isDemos(SESSION_SECRET)) refuse('SESSION_SECRET', 'is the demo’s');
  else if (new Set(SESSION_SECRET).size < 8) refuse('SESSION_SECRET', 'is too plain');
  if (isDemos(OIDC_CLIENT_SECRET)) refuse('OIDC_CLIENT_SECRET', 'is the demo’s');
  if (isDemos(given.DELIVERY_REPORT_TOKEN ?? '')) refuse('DELIVERY_REPORT_TOKEN', 'is the demo’s');
  if (BASE_URL === undefined) refuse('BASE_URL', 'is missing');
  else if (!isHttps(BASE_URL)) refuse('BASE_URL', 'must begin with https:// (session cookies are sent over TLS only)');
  if (!isHttps(OIDC_ISSUER_URL)) refuse('OIDC_ISSUER_URL', 'must begin with https://');
  if (given.TRUST_PROXY === 'false' || given.TRUST_PROXY === '0')
    refuse('TRUST_PROXY', 'must name the proxy that ends TLS (without one nobody can sign in)');
  if ('CLOCK_OFFSET' in given) refuse('CLOCK_OFFSET', 'is for tests only');
  return faults;
}

function isHttps(url: string): boolean {
  return /^https:\/\//i.test(url);
}

function isTrustProxy(text: string): boolean {
  if (text === 'false' || /^\d{1,2}$/.test(text)) return true;
  return text
    .split(',')
    .map((part) => part.trim())
    .every((part) => {
      const [address, bits, ...more] = part.split('/');
      if (['loopback', 'linklocal', 'uniquelocal'].includes(part)) return true;
      const family = isIP(address);
      const widest = family === 4 ? 32 : 128;
      return (
        family > 0 && more.length === 0 && (bits === undefined || (/^\d{1,3}$/.test(bits) && Number(bits) <= widest))
      );
    });
}

function readTrustProxy(text: string): number | string | false {
  if (text === 'false' || text === '0') return false;
  const hops = Number(text);
  return Number.isInteger(hops) ? hops : text;
}

/** Where backups go and how many are kept, for the command line; a wrong number is an error of the command. */
export function readBackupSettings(env: Record<string, string | undefined>): { dir: string; keep: number } {
  const { BACKUP_DIR, BACKUP_KEEP } = schema
    .pick({ BACKUP_DIR: true, BACKUP_KEEP: true })
    .parse(Object.fromEntries(Object.entries(env).filter(([, value]) => value !== undefined && value !== '')));
  return { dir: BACKUP_DIR === undefined ? backupDirIn(readDataDir(env)) : resolve(BACKUP_DIR), keep: BACKUP_KEEP };
}

/** Where backups go unless told otherwise. */
export function backupDirIn(dataDir: string): string {
  return join(dataDir, 'backups');
}

/** The data folder alone, for commands that need nothing else. */
export function readDataDir(env: Record<string, string | undefined>): string {
  return resolve(env.DATA_DIR === undefined || env.DATA_DIR === '' ? './data' : env.DATA_DIR);
}
