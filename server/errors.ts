import type { Problem } from '../shared/api/common.ts';

/** A wrong or missing setting; the start ends with its message. */
export class ConfigError extends Error {
  override name = 'ConfigError';
}

/** One fault of an input: where, and what to do. */
export interface Fault {
  at: string;
  message: string;
}

/**
 * An answer other than success that a person can act on: what happened, what was kept, what to do
 * next. Every named error below is one; anything else that is thrown is a fault of ours (500).
 */
export class HttpError extends Error {
  override name = 'HttpError';
  readonly status: number;
  readonly title: string;
  readonly kept: string | undefined;
  readonly next: string | undefined;
  readonly faults: Fault[] | undefined;

  constructor(
    status: number,
    title: string,
    detail: string,
    more: { kept?: string; next?: string; faults?: Fault[] } = {},
  ) {
    super(detail);
    this.status = status;
    this.title = title;
    this.kept = more.kept;
    this.next = more.next;
    this.faults = more.faults;
  }

  /** The RFC 9457 document. */
  toProblem(requestId: string | undefined): Problem {
    return {
      type: 'about:blank',
      title: this.title,
      status: this.status,
      detail: this.message,
      ...(this.kept === undefined ? {} : { kept: this.kept }),
      ...(this.next === undefined ? {} : { next: this.next }),
      ...(this.faults === undefined ? {} : { faults: this.faults }),
      ...(requestId === undefined ? {} : { requestId }),
    };
  }
}

/** 400: the input does not fit; every fault is listed. */
export function badInput(
  detail: string,
  faults: Fault[] = [],
  next = 'Correct what is listed and send it again.',
): HttpError {
  return new HttpError(400, 'Input refused', detail, { kept: 'Nothing was stored.', next, faults });
}

/** 401: nobody is signed in. */
export function notSignedIn(): HttpError {
  return new HttpError(401, 'Not signed in', 'This needs a signed-in person.', {
    kept: 'Nothing was stored.',
    next: 'Sign in and try again.',
  });
}

/** 401: signed in, but the screen was left alone for too long. */
export function sessionLocked(): HttpError {
  return new HttpError(401, 'Locked', 'Nobody used this session for a while, so it locked itself.', {
    kept: 'Nothing was stored.',
    next: 'Sign in again to unlock it.',
  });
}

/** 401: the machine token is not one of ours, or was revoked. */
export function tokenRefused(): HttpError {
  return new HttpError(401, 'Token refused', 'This machine token is not known here, or was revoked.', {
    kept: 'Nothing was stored.',
    next: 'Ask the administrator for a new token.',
  });
}

/** 403: a token of this site, for something else. */
export function tokenForOther(): HttpError {
  return new HttpError(403, 'Not allowed', 'This machine token is for another purpose.', {
    kept: 'Nothing was stored.',
    next: 'Use a token that was made for this.',
  });
}

/** 403: signed in, at this site, but not with a role that may. */
export function notAllowed(): HttpError {
  return new HttpError(403, 'Not allowed', 'Your roles at this site do not include this.', {
    kept: 'Nothing was changed.',
    next: 'Ask the administrator if they should.',
  });
}

/** 404: not there, or not yours: the two are told apart for nobody. */
export function notFound(what = 'This'): HttpError {
  return new HttpError(404, 'Not found', `${what} was not found.`, { next: 'Check the address or go back.' });
}

/** 409: it clashes with what is there. */
export function conflict(detail: string, next: string): HttpError {
  return new HttpError(409, 'Conflict', detail, { kept: 'Everything stored before is unchanged.', next });
}
