import { readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { brotliCompressSync } from 'node:zlib';
import tailwindcss from '@tailwindcss/vite';
import react from '@vitejs/plugin-react';
import type { Plugin } from 'vite';
import { defineConfig } from 'vitest/config';

const server = 'http://127.0.0.1:4310';

/** Puts a copy compressed with Brotli beside every script and style sheet; the server sends these. */
function compressedCopies(): Plugin {
  return {
    name: 'compressed-copies',
    apply: 'build',
    writeBundle({ dir = '' }, bundle) {
      for (const file of Object.keys(bundle)) {
        if (!/^assets\/.*\.(?:js|css|svg)$/.test(file)) continue;
        writeFileSync(join(dir, `${file}.br`), brotliCompressSync(readFileSync(join(dir, file))));
      }
    },
  };
}

export default defineConfig({
  plugins: [react(), tailwindcss(), compressedCopies()],
  // The server puts a fresh nonce in place of this mark in every page it sends.
  html: { cspNonce: '__CSP_NONCE__' },
  publicDir: 'src/assets/public',
  build: {
    outDir: 'dist/client',
    emptyOutDir: true,
    sourcemap: true,
    // A small file inlined into the style sheet as data: would be refused as a font by the content policy.
    assetsInlineLimit: 0,
    // What the service worker keeps; beside the page, since its name must not change.
    manifest: 'parts.json',
    rolldownOptions: {
      input: { index: 'index.html', 'service-worker': 'src/service-worker.ts' },
      output: {
        // What most pages share is one file: thirty small ones are five rounds of requests before a page is there.
        codeSplitting: { groups: [{ name: 'parts', test: /\/(?:src|shared)\//, minShareCount: 10 }] },
        entryFileNames: ({ name }) => (name === 'service-worker' ? '[name].js' : 'assets/[name]-[hash].js'),
      },
    },
  },
  server: { proxy: { '/api': server, '/auth': server, '/mail': server, '/healthz': server } },
  test: {
    projects: [
      {
        test: {
          name: 'shared',
          environment: 'node',
          include: ['tests/shared/**/*.test.ts'],
          env: { TZ: 'UTC' },
          testTimeout: 60_000,
        },
      },
      {
        // The same zone-dependent tests on a machine far from Greenwich.
        test: {
          name: 'shared, machine in Auckland',
          environment: 'node',
          include: ['tests/shared/domain/**/*.test.ts'],
          env: { TZ: 'Pacific/Auckland' },
          testTimeout: 60_000,
        },
      },
      {
        test: {
          name: 'server',
          environment: 'node',
          include: ['tests/server/**/*.test.ts'],
          setupFiles: ['tests/support/setup-server.ts'],
          testTimeout: 60_000,
          hookTimeout: 60_000,
        },
      },
      {
        plugins: [react()],
        test: {
          name: 'client',
          environment: 'jsdom',
          include: ['tests/src/**/*.test.{ts,tsx}', 'tests/shared/**/*.test.tsx'],
          setupFiles: ['tests/src/setup-client.ts'],
          testTimeout: 20_000,
        },
      },
      {
        // A real browser on the built product with its demo; after everything else, one at a time.
        test: {
          name: 'journeys',
          environment: 'node',
          include: ['tests/journeys/**/*.test.ts'],
          fileParallelism: false,
          sequence: { groupOrder: 1 },
          testTimeout: 180_000,
          hookTimeout: 180_000,
        },
      },
    ],
  },
});
