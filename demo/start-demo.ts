import { demoSecrets, readConfig } from '../server/config.ts';
import { startServer, type RunningServer } from '../server/start.ts';
import { buildDemo, type Say } from './build-demo.ts';
import { demoAccounts, demoPassword } from './farrowmere-accounts.ts';
import { startMailbox } from './mailbox.ts';
import { startOidcIssuer } from './oidc-issuer.ts';

export interface RunningDemo {
  server: RunningServer;
  url: string;
  issuerUrl: string;
  mailboxUrl: string;
  stop(): Promise<void>;
}

/**
 * Starts the product with its stand-ins (identity provider on PORT+1, mail server on PORT+2, mailbox page
 * on PORT+3, all on loopback) and brings the demo up to now.
 */
export async function startDemo(env: Record<string, string | undefined>, say: Say): Promise<RunningDemo> {
  const port = Number(env.PORT ?? 4310);
  const [sessionSecret, clientSecret, reportToken] = demoSecrets;
  const config = readConfig(
    {
      LOG_LEVEL: 'warn',
      OIDC_ISSUER_URL: `http://127.0.0.1:${String(port + 1)}`,
      OIDC_CLIENT_ID: 'shoalmark',
      OIDC_CLIENT_SECRET: clientSecret,
      SESSION_SECRET: sessionSecret,
      SMTP_URL: `smtp://127.0.0.1:${String(port + 2)}`,
      DELIVERY_REPORT_TOKEN: reportToken,
      ADMINISTRATOR_CONTACT: 'Kirsa Quayle, kirsa.quayle@farrowmere.example',
      ...env,
    },
    { production: false },
  );
  const issuer = await startOidcIssuer({
    port: port + 1,
    clientId: config.oidc.clientId,
    clientSecret: config.oidc.clientSecret,
    redirectUris: [`${config.baseUrl}/auth/callback`],
    postLogoutRedirectUris: [`${config.baseUrl}/sign-in`],
    accounts: demoAccounts,
    dataDir: config.dataDir,
    password: demoPassword,
  });
  const mailbox = await startMailbox({
    smtpPort: port + 2,
    httpPort: port + 3,
    // As a mail server's pipe would do it, a moment after it took the message.
    onReturned: (report) => {
      setTimeout(() => {
        fetch(`http://127.0.0.1:${String(port)}/mail/delivery-reports`, {
          method: 'POST',
          headers: { authorization: `Bearer ${reportToken}`, 'content-type': 'message/rfc822' },
          body: report,
        }).catch(() => undefined);
      }, 1000);
    },
  });
  const server = await startServer(config);
  await buildDemo(server, say);
  return {
    server,
    url: config.baseUrl,
    issuerUrl: issuer.url,
    mailboxUrl: mailbox.url,
    async stop() {
      await server.stop();
      await mailbox.close();
      await issuer.close();
    },
  };
}
