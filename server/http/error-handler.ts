import type { ErrorRequestHandler } from 'express';
import { HttpError, notFound } from '../errors.ts';
import type { Logger } from '../log.ts';
import { requestIdOf } from './route.ts';

/** The one place that turns an error into a reply: an RFC 9457 problem document. */
export function makeErrorHandler(logger: Logger): ErrorRequestHandler {
  return (error: unknown, req, res, next) => {
    if (res.headersSent) {
      next(error);
      return;
    }
    const requestId = requestIdOf(req);
    const known = error instanceof HttpError ? error : fromExpress(error);
    if (!known) logger.error({ err: error, requestId, method: req.method, path: req.path }, 'a request failed');
    const answer =
      known ??
      new HttpError(
        500,
        'Server fault',
        'The server could not finish this. The fault is ours and is in the server’s log.',
        {
          kept: 'Nothing of this request was stored.',
          next: `Try again; if it fails again, give the administrator the request id ${requestId}.`,
        },
      );
    res
      .status(answer.status)
      .setHeader('cache-control', 'no-store')
      .type('application/problem+json')
      .send(JSON.stringify(answer.toProblem(requestId)));
  };
}

/**
 * Errors that Express and its middleware raise over what a client sent: those of http-errors mark
 * themselves as fit to be shown (`expose`), an address that cannot be decoded is a URIError.
 */
function fromExpress(error: unknown): HttpError | null {
  if (!(error instanceof Error) || !('status' in error) || typeof error.status !== 'number') return null;
  const { status } = error;
  const isClients = error instanceof URIError || ('expose' in error && error.expose === true);
  if (!isClients || status < 400 || status >= 500) return null;
  if (status === 404) return notFound('This address');
  const kept = 'Nothing was stored.';
  if (status === 413) {
    return new HttpError(413, 'Too large', 'The request is larger than this route takes.', {
      kept,
      next: 'Send less at once.',
    });
  }
  if ('type' in error && error.type === 'entity.parse.failed') {
    return new HttpError(400, 'Input refused', 'The request is not valid JSON.', { kept, next: 'Send valid JSON.' });
  }
  return new HttpError(status, 'Input refused', 'The request could not be read.', {
    kept,
    next: 'Check the request and send it again.',
  });
}
