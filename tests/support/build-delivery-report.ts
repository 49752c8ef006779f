/** A delivery status notification in the form of RFC 3464 (appendix E.1 is such a one), about a message of ours. */
export function buildDeliveryReport({
  messageId,
  recipient = 'reader0@example.org',
  action = 'failed',
  status = '5.1.1',
  said = `550 5.1.1 <${recipient}>: no such user here`,
  returns = 'text/rfc822-headers',
}: {
  /** With its domain and angle brackets; null leaves the returned message out. */
  messageId: string | null;
  recipient?: string;
  action?: string;
  status?: string;
  said?: string;
  returns?: 'text/rfc822-headers' | 'message/rfc822';
}): string {
  return [
    'Return-Path: <>',
    'From: Mail Delivery Subsystem <MAILER-DAEMON@mx.example.org>',
    'To: <brief@farrowmere.example>',
    'Subject: Returned mail: cannot be delivered',
    'MIME-Version: 1.0',
    'Auto-Submitted: auto-replied',
    'Content-Type: multipart/report; report-type=delivery-status; boundary="part-1"',
    '',
    '--part-1',
    'Content-Type: text/plain; charset=utf-8',
    '',
    'Action: this sentence is for people and is no field.',
    '',
    '--part-1',
    'Content-Type: message/delivery-status',
    '',
    'Reporting-MTA: dns; mx.example.org',
    '',
    `Original-Recipient: rfc822;${recipient}`,
    `Final-Recipient: rfc822;${recipient}`,
    `Action: ${action}`,
    `Status: ${status}`,
    `Diagnostic-Code: smtp; ${said.slice(0, 10)}`,
    `  ${said.slice(10)}`,
    '',
    '--part-1',
    `Content-Type: ${returns}`,
    '',
    ...(messageId === null ? [] : [`Message-ID: ${messageId}`]),
    'Subject: Test site, weekly brief',
    ...(returns === 'message/rfc822' ? ['', 'The brief.'] : []),
    '',
    '--part-1--',
    '',
  ].join('\r\n');
}
