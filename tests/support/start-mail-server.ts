import type { AddressInfo } from 'node:net';
import { SMTPServer, type SMTPServerSession } from 'smtp-server';

/** One message as a mail server took it. */
export interface TakenMail {
  to: string[];
  raw: string;
  messageId: string;
}

/** A mail server on the loopback address that keeps what it takes and can be told to fail. */
export interface TestMailServer {
  smtpUrl: string;
  port: number;
  /** In the order taken. */
  taken: TakenMail[];
  /** Connections so far. */
  connections: () => number;
  close(): Promise<void>;
}

export interface MailServerFaults {
  port?: number;
  /** An answer for a recipient in place of taking them. */
  onRecipient?: (address: string) => { code: number; text: string } | null;
  /** Called when the message has ended, before it is answered; 'hang up' breaks the connection without an answer. */
  onMessage?: (mail: TakenMail) => 'take' | 'hang up' | 'take and hang up' | Promise<'take'>;
}

/** The header's value, unfolded; empty where there is none. */
export function headerOf(raw: string, name: string): string {
  const head = raw.slice(0, raw.indexOf('\r\n\r\n')).replace(/\r\n[ \t]+/g, ' ');
  const line = head.split('\r\n').find((each) => each.toLowerCase().startsWith(`${name.toLowerCase()}:`));
  return line ? line.slice(name.length + 1).trim() : '';
}

export async function startMailServer(faults: MailServerFaults = {}): Promise<TestMailServer> {
  const taken: TakenMail[] = [];
  let connections = 0;
  const hangUp = (session: SMTPServerSession) => {
    for (const connection of smtp.connections) {
      const open = connection as unknown as { id: string; _socket: { destroy(): void } };
      if (open.id === session.id) open._socket.destroy();
    }
  };
  const smtp = new SMTPServer({
    authOptional: true,
    disabledCommands: ['STARTTLS', 'AUTH'],
    disableReverseLookup: true,
    onConnect(_session, callback) {
      connections += 1;
      callback();
    },
    onRcptTo({ address }, _session, callback) {
      const answer = faults.onRecipient?.(address) ?? null;
      if (answer === null) callback();
      else callback(Object.assign(new Error(answer.text), { responseCode: answer.code }));
    },
    onData(stream, session, callback) {
      const chunks: Buffer[] = [];
      stream.on('data', (chunk: Buffer) => chunks.push(chunk));
      stream.on('end', () => {
        const raw = Buffer.concat(chunks).toString('utf8');
        const to = session.envelope.rcptTo.map(({ address }) => address);
        const mail = { to, raw, messageId: headerOf(raw, 'Message-ID') };
        void Promise.resolve(faults.onMessage?.(mail) ?? 'take').then((what) => {
          if (what !== 'hang up') taken.push(mail);
          if (what === 'take') callback();
          else hangUp(session);
        });
      });
    },
  });
  // A sender that breaks off is part of what is tested.
  smtp.on('error', () => undefined);
  await new Promise<void>((resolve) => smtp.listen(faults.port ?? 0, '127.0.0.1', resolve));
  const { port } = smtp.server.address() as AddressInfo;
  return {
    smtpUrl: `smtp://127.0.0.1:${String(port)}`,
    port,
    taken,
    connections: () => connections,
    close: () => new Promise((resolve) => smtp.close(() => resolve())),
  };
}
