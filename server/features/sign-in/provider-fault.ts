/** Codes of OAuth 2.0 (RFC 6749, 4.1.2.1) by which a provider says that it cannot answer now. */
const outOfOrder = ['server_error', 'temporarily_unavailable'];

/**
 * True where a sign-in failed because the identity provider, or the way to it, is out of order: no answer in time, a
 * broken connection, a status of 500 and over. False where it answered and the answer does not prove who the person is.
 */
export function isProviderOutOfOrder(error: unknown): boolean {
  for (let cause = error; cause instanceof Error || cause instanceof Response;) {
    if (cause instanceof Response) return cause.status >= 500;
    if ('status' in cause && typeof cause.status === 'number' && cause.status >= 500) return true;
    if ('error' in cause && typeof cause.error === 'string' && outOfOrder.includes(cause.error)) return true;
    if ('code' in cause && cause.code === 'OAUTH_TIMEOUT') return true;
    // What the platform's fetch throws where no answer came (its own text; the code beneath differs by system).
    if (cause instanceof TypeError && cause.message === 'fetch failed') return true;
    cause = cause.cause;
  }
  return false;
}
