import type { ErrorRequestHandler } from 'express';
import { HttpError } from '../errors.ts';
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
    const known = error instanceof HttpError ? error : fromBodyParser(error);
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

/** express.json()'s own errors carry a status and a type. */
function fromBodyParser(error: unknown): HttpError | null {
  if (!(error instanceof Error) || !('type' in error) || !('status' in error)) return null;
  const kept = 'Nothing was stored.';
  if (error.type === 'entity.too.large') {
    return new HttpError(413, 'Too large', 'The request is larger than this route takes.', {
      kept,
      next: 'Send less at once.',
    });
  }
  if (error.type === 'entity.parse.failed') {
    return new HttpError(400, 'Input refused', 'The request is not valid JSON.', { kept, next: 'Send valid JSON.' });
  }
  if (typeof error.status === 'number' && error.status >= 400 && error.status < 500) {
    return new HttpError(error.status, 'Input refused', 'The request could not be read.', {
      kept,
      next: 'Check the request and send it again.',
    });
  }
  return null;
}
