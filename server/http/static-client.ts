import { existsSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import express, { type Express } from 'express';
import { notFound } from '../errors.ts';
import { nonceOf } from './security-headers.ts';

/** Serves the built client: hashed assets for a year, and the page with this reply's nonce for every other address. */
export function serveClient(app: Express, clientDir: string): void {
  const indexFile = join(clientDir, 'index.html');
  if (!existsSync(indexFile)) return;
  const page = readFileSync(indexFile, 'utf8');
  app.use('/assets', express.static(join(clientDir, 'assets'), { immutable: true, maxAge: '1y' }));
  // A page of an older version asks for assets that are gone: not there, rather than our fault.
  app.use('/assets', (_req, _res, next) => {
    next(notFound('This file'));
  });
  app.use(
    express.static(clientDir, {
      index: false,
      maxAge: '1h',
      setHeaders: (res, file) => {
        // A kept copy of these would hold a device to an older version.
        if (/(?:service-worker\.js|parts\.json)$/.test(file)) res.setHeader('cache-control', 'no-cache');
      },
    }),
  );
  app.get('/{*path}', (_req, res) => {
    res
      .setHeader('cache-control', 'no-store')
      .type('html')
      .send(page.replaceAll('__CSP_NONCE__', nonceOf(res)));
  });
}
