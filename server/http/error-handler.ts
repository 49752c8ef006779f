import type { ErrorRequestHandler } from 'express';
import { signIn, signInCallback } from '../../shared/api/session.ts';
import { databaseFaultOf, type DatabaseFaultKind } from '../database/database-fault.ts';
import { HttpError, notFound } from '../errors.ts';
import { loggedPath, type Logger } from '../log.ts';
import { requestIdOf } from './route.ts';
import { localPath, problemPage } from './sign-in-page.ts';

const signInPaths: readonly string[] = [signIn.path, signInCallback.path];

/** The one place that turns an error into a reply: an RFC 9457 problem document. */
export function makeErrorHandler(logger: Logger): ErrorRequestHandler {
  return (error: unknown, req, res, next) => {
    if (res.headersSent) {
      next(error);
      return;
    }
    const requestId = requestIdOf(req);
    const known = error instanceof HttpError ? error : fromExpress(error);
    const fault = known ? null : databaseFaultOf(error);
    if (!known)
      logger.error({ err: error, requestId, method: req.method, path: loggedPath(req.path) }, 'a request failed');
    // A person is sent here by the browser, not a page of ours: words to read, instead of a document for programs.
    if (req.method === 'GET' && signInPaths.includes(req.path) && (known === null || known.status === 429)) {
      res.redirect(problemPage(known ? 'busy' : 'fault', localPath(req.query.returnTo)));
      return;
    }
    if (fault?.kind === 'locked') res.setHeader('retry-after', '5');
    const answer =
      known ??
      (fault ? cannotStore[fault.kind] : null) ??
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

const kept = 'Nothing of this request was stored; everything stored before is unchanged.';
const tellAdministrator = 'Keep what you typed and tell the administrator; it can be sent again once that is mended.';

/** Faults of the place where data is kept. A damaged file stays a fault of ours: nobody but the administrator can act. */
const cannotStore: Record<DatabaseFaultKind, HttpError | null> = {
  'no room': new HttpError(507, 'No room', 'The server’s disk is full.', { kept, next: tellAdministrator }),
  locked: new HttpError(503, 'Database in use', 'Another program on the server holds the database.', {
    kept,
    next: 'Wait a few seconds and send it again.',
  }),
  'not writable': new HttpError(503, 'Cannot be stored', 'The server cannot write to its data folder.', {
    kept,
    next: tellAdministrator,
  }),
  damaged: null,
};

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
