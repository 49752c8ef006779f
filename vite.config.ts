import tailwindcss from '@tailwindcss/vite';
import react from '@vitejs/plugin-react';
import { defineConfig } from 'vite';

const server = 'http://127.0.0.1:4310';

export default defineConfig({
  plugins: [react(), tailwindcss()],
  // The server puts a fresh nonce in place of this mark in every page it sends.
  html: { cspNonce: '__CSP_NONCE__' },
  publicDir: 'src/assets/public',
  build: {
    outDir: 'dist/client',
    emptyOutDir: true,
    sourcemap: true,
    // A small file inlined into the style sheet as data: would be refused as a font by the content policy.
    assetsInlineLimit: 0,
  },
  server: { proxy: { '/api': server, '/auth': server, '/healthz': server } },
});
