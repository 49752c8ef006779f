import { readConfig } from './config.ts';
import { ConfigError } from './errors.ts';
import { startServer } from './start.ts';

/** Production: no stand-ins, secure cookies, every secret from the environment. */
try {
  const server = await startServer(readConfig(process.env, { production: true }));
  let stopping = false;
  for (const signal of ['SIGINT', 'SIGTERM'] as const) {
    process.on(signal, () => {
      if (stopping) return;
      stopping = true;
      void server.stop().then(() => process.exit(0));
    });
  }
} catch (error) {
  if (!(error instanceof ConfigError)) throw error;
  process.stderr.write(`${error.message}\n`);
  process.exitCode = 1;
}
