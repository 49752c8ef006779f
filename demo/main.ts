import { ConfigError } from '../server/errors.ts';
import { demoAccounts, demoPassword } from './farrowmere-accounts.ts';
import { startDemo } from './start-demo.ts';

const say = (text: string) => process.stdout.write(`${text}\n`);
try {
  say('Shoalmark demo: starting. Everything in it is invented; nothing leaves this machine.');
  const demo = await startDemo(process.env, say);
  const width = Math.max(...demoAccounts.map((account) => account.username.length));
  say(
    [
      '',
      `Open ${demo.url}`,
      '',
      `Accounts (password of each: ${demoPassword}):`,
      ...demoAccounts.map((account) => `  ${account.username.padEnd(width)}  ${account.name}, ${account.does}`),
      '',
      `Stand-in sign-in ${demo.issuerUrl}, mailbox ${demo.mailboxUrl}. Stop with Ctrl+C.`,
    ].join('\n'),
  );
  let stopping = false;
  for (const signal of ['SIGINT', 'SIGTERM'] as const) {
    process.on(signal, () => {
      if (stopping) return;
      stopping = true;
      void demo.stop().then(() => process.exit(0));
    });
  }
} catch (error) {
  const inUse = error instanceof Error && 'code' in error && error.code === 'EADDRINUSE' && 'port' in error;
  const line = inUse
    ? `Cannot start: port ${String(error.port)} is in use. The demo takes PORT and the three after it; set PORT to another.`
    : error instanceof ConfigError
      ? error.message
      : String(error instanceof Error ? error.stack : error);
  process.stderr.write(`${line}\n`);
  process.exit(1);
}
