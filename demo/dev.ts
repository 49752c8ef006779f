import { createServer } from 'vite';
import { startDemo } from './start-demo.ts';

/**
 * `npm run dev`: the demo from source, with Vite's development server in front of it. The API answers on
 * PORT; open Vite's address, which passes /api and /auth on.
 */
const say = (text: string) => process.stdout.write(`${text}\n`);
const clientPort = 5173;
const baseUrl = `http://127.0.0.1:${String(clientPort)}`;
const vite = await createServer({ server: { host: '127.0.0.1', port: clientPort, strictPort: true } });
await vite.listen();
const demo = await startDemo({ BASE_URL: baseUrl, ...process.env }, say);
say(`Open ${baseUrl}; sign in as charge, operations, steward … with the password demo.`);
for (const signal of ['SIGINT', 'SIGTERM'] as const) {
  process.once(signal, () => {
    void Promise.all([vite.close(), demo.stop()]).then(() => process.exit(0));
  });
}
