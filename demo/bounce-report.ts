import type { KeptMail } from './mailbox-pages.ts';

/** Addresses that the stand-in mail server takes and then cannot deliver to. */
export function bounces(address: string): boolean {
  return /^bounce[^@]*@/i.test(address);
}

/** What a mail server sends back in the form of RFC 3464 when it finds no such mailbox. */
export function bounceReport(mail: Pick<KeptMail, 'headers'>, address: string): string {
  const headerOf = (name: string) =>
    mail.headers.find((header) => header.name.toLowerCase() === name.toLowerCase())?.value ?? '';
  return [
    'From: Stand-in mail server <MAILER-DAEMON@mail.farrowmere.example>',
    `To: ${headerOf('From')}`,
    'Subject: Returned: there is no such mailbox',
    'MIME-Version: 1.0',
    'Auto-Submitted: auto-replied',
    'Content-Type: multipart/report; report-type=delivery-status; boundary="returned"',
    '',
    '--returned',
    'Content-Type: text/plain; charset=utf-8',
    '',
    'The stand-in mail server found no such mailbox.',
    '',
    '--returned',
    'Content-Type: message/delivery-status',
    '',
    'Reporting-MTA: dns; mail.farrowmere.example',
    '',
    `Final-Recipient: rfc822;${address}`,
    'Action: failed',
    'Status: 5.1.1',
    'Diagnostic-Code: smtp; 550 5.1.1 There is no such mailbox',
    '',
    '--returned',
    'Content-Type: text/rfc822-headers',
    '',
    `Message-ID: ${headerOf('Message-ID')}`,
    `Subject: ${headerOf('Subject')}`,
    '',
    '--returned--',
    '',
  ].join('\r\n');
}
