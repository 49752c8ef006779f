/** The session cookie's name. The prefix makes browsers refuse it without TLS or from another host (RFC 6265bis, 4.1.3). */
export function sessionCookie(production: boolean): string {
  return production ? '__Host-shoalmark' : 'shoalmark';
}
