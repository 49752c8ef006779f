import { resolve } from 'node:path';
import express from 'express';
import { describe, expect, test } from 'vitest';
import { demoSecrets, readConfig } from '../../server/config.ts';
import { ConfigError } from '../../server/errors.ts';

const least = {
  OIDC_ISSUER_URL: 'https://identity.example/realm/',
  OIDC_CLIENT_ID: 'shoalmark',
  OIDC_CLIENT_SECRET: 'a client secret',
  SESSION_SECRET: 'a session secret of 0123456789 characters',
};
const productionLeast = { ...least, BASE_URL: 'https://shoalmark.example' };

type Env = Record<string, string | undefined>;
const development = (more: Env = {}) => readConfig({ ...least, ...more }, { production: false });
const production = (more: Env = {}) => readConfig({ ...productionLeast, ...more }, { production: true });

/** The message of a refused start. */
function refusal(read: () => unknown): string {
  try {
    read();
  } catch (error) {
    expect(error).toBeInstanceOf(ConfigError);
    return (error as ConfigError).message;
  }
  throw new Error('the start was not refused');
}

describe('settings', () => {
  test('have the defaults that operators are told of', () => {
    expect(development()).toEqual({
      production: false,
      host: '127.0.0.1',
      port: 4310,
      dataDir: resolve('data'),
      baseUrl: 'http://127.0.0.1:4310',
      trustProxy: false,
      oidc: {
        issuerUrl: 'https://identity.example/realm',
        clientId: 'shoalmark',
        clientSecret: 'a client secret',
      },
      sessionSecret: least.SESSION_SECRET,
      smtpUrl: null,
      mailFrom: 'Shoalmark <shoalmark@localhost>',
      logLevel: 'info',
      administratorContact: 'the administrator of this installation',
      threads: 2,
      idleMinutes: 15,
      sessionHours: 12,
      requestsPerMinute: 1200,
      deliveryReportToken: null,
      metricsToken: null,
      backupDir: null,
      backupEveryHours: 24,
      backupKeep: 14,
      clockOffset: 0,
    });
  });

  test('are all read', () => {
    const read = development({
      HOST: '::1',
      PORT: '8080',
      DATA_DIR: '/var/lib/shoalmark',
      TRUST_PROXY: '1',
      SMTP_URL: 'smtps://mail.example:465',
      MAIL_FROM: 'Beds <beds@hospital.example>',
      LOG_LEVEL: 'debug',
      ADMINISTRATOR_CONTACT: 'the service desk',
      THREADS: '4',
      CLOCK_OFFSET: '-3600',
    });
    expect(read).toMatchObject({
      host: '::1',
      port: 8080,
      dataDir: '/var/lib/shoalmark',
      baseUrl: 'http://[::1]:8080',
      trustProxy: 1,
      smtpUrl: 'smtps://mail.example:465',
      mailFrom: 'Beds <beds@hospital.example>',
      logLevel: 'debug',
      administratorContact: 'the service desk',
      threads: 4,
      clockOffset: -3600,
    });
    expect(development({ BASE_URL: 'https://shoalmark.example:8443/' }).baseUrl).toBe('https://shoalmark.example:8443');
  });

  test('that are empty count as not set', () => {
    expect(development({ PORT: '', DATA_DIR: '', BASE_URL: '', TRUST_PROXY: '' })).toEqual(development());
    expect(refusal(() => development({ SESSION_SECRET: '' }))).toContain('SESSION_SECRET is missing');
  });

  test.each([
    ['false', false],
    ['0', false],
    ['2', 2],
    ['loopback', 'loopback'],
    ['10.0.0.0/8, 192.168.1.7', '10.0.0.0/8, 192.168.1.7'],
    ['fd00::/8', 'fd00::/8'],
  ])('TRUST_PROXY=%s is understood, and by Express too', (text, expected) => {
    const { trustProxy } = development({ TRUST_PROXY: text });
    expect(trustProxy).toBe(expected);
    expect(() => express().set('trust proxy', trustProxy)).not.toThrow();
  });
});

describe('a wrong or missing value stops the start', () => {
  test('with one line that names every one of them', () => {
    const message = refusal(() =>
      readConfig({ PORT: '99999', SESSION_SECRET: 'short', THREADS: '0', BASE_URL: 'nonsense' }, { production: false }),
    );
    expect(message).not.toContain('\n');
    for (const name of ['OIDC_ISSUER_URL', 'OIDC_CLIENT_ID', 'OIDC_CLIENT_SECRET']) {
      expect(message).toContain(`${name} is missing`);
    }
    for (const name of ['PORT', 'SESSION_SECRET', 'THREADS', 'BASE_URL']) {
      expect(message).toContain(`${name} is wrong (`);
    }
    expect(message).not.toMatch(/\bHOST\b|TRUST_PROXY|short|nonsense/);
  });

  test.each([
    ['PORT', '0'],
    ['PORT', 'http'],
    ['PORT', '43.5'],
    ['PORT', ' '],
    ['BASE_URL', 'ftp://shoalmark.example'],
    ['BASE_URL', 'https://hospital.example/shoalmark'],
    ['BASE_URL', 'https://hospital.example/?a=1'],
    ['OIDC_ISSUER_URL', 'identity.example'],
    ['TRUST_PROXY', 'yes'],
    ['TRUST_PROXY', 'true'],
    ['TRUST_PROXY', '-1'],
    ['TRUST_PROXY', '10.0.0.0/99'],
    ['TRUST_PROXY', '10.0.0.1, proxy.example'],
    ['SMTP_URL', 'https://mail.example'],
    ['MAIL_FROM', 'x'],
    ['LOG_LEVEL', 'loud'],
    ['THREADS', '65'],
    ['CLOCK_OFFSET', 'tomorrow'],
    ['SESSION_SECRET', 'x'.repeat(31)],
  ])('%s=%s', (name, value) => {
    const message = refusal(() => development({ [name]: value }));
    expect(message).toContain(`${name} is wrong (`);
    expect(message.split('; ')).toHaveLength(1);
  });
});

describe('a production start', () => {
  test('takes a full set, and trusts a proxy on its own machine unless told of another', () => {
    expect(production()).toMatchObject({
      production: true,
      baseUrl: 'https://shoalmark.example',
      trustProxy: 'loopback',
    });
    expect(production({ TRUST_PROXY: '10.1.2.3' }).trustProxy).toBe('10.1.2.3');
  });

  test.each([
    ['the demo’s session secret', { SESSION_SECRET: demoSecrets[0] }, 'SESSION_SECRET is the demo’s'],
    ['the demo’s client secret', { OIDC_CLIENT_SECRET: demoSecrets[1] }, 'OIDC_CLIENT_SECRET is the demo’s'],
    ['a plain secret', { SESSION_SECRET: 'ab'.repeat(20) }, 'SESSION_SECRET is too plain'],
    ['no BASE_URL', { BASE_URL: undefined }, 'BASE_URL is missing'],
    ['plain http', { BASE_URL: 'http://shoalmark.example' }, 'BASE_URL must begin with https://'],
    ['a plain issuer', { OIDC_ISSUER_URL: 'http://identity.example' }, 'OIDC_ISSUER_URL must begin with https://'],
    ['no proxy', { TRUST_PROXY: 'false' }, 'TRUST_PROXY must name the proxy'],
    ['a test clock', { CLOCK_OFFSET: '0' }, 'CLOCK_OFFSET is for tests only'],
  ])('refuses %s', (_, more, expected) => {
    expect(refusal(() => production(more))).toContain(expected);
    if (!('BASE_URL' in more)) expect(() => development(more)).not.toThrow();
  });

  test('names what is refused in production together with what is wrong anywhere, each once', () => {
    const message = refusal(() =>
      readConfig({ SESSION_SECRET: 'ab', OIDC_CLIENT_ID: 'x', CLOCK_OFFSET: '5', PORT: '0' }, { production: true }),
    );
    for (const name of [
      'SESSION_SECRET',
      'OIDC_ISSUER_URL',
      'OIDC_CLIENT_SECRET',
      'BASE_URL',
      'CLOCK_OFFSET',
      'PORT',
    ]) {
      expect(message.split(name), name).toHaveLength(2);
    }
  });
});
