import type { z } from 'zod';
import { problem } from '../../shared/api/common.ts';
import type { BodyInputOf, Contract, ParamsOf, ReplyOf } from '../../shared/api/contract.ts';
import { ApiError, isOutage } from './api-error.ts';
import { isInUse } from './last-use.ts';

// The widest contract there is; a contract's own schemas are read through the types below.
type AnyContract = Contract;
type QueryInputOf<C> = C extends Contract<z.ZodType, infer Q> ? z.input<Q> : never;

// A contract without a schema for a part has `unknown` there; such a part must be left out.
type Part<Key extends string, Value> = unknown extends Value ? { [key in Key]?: undefined } : { [key in Key]: Value };

interface Common {
  signal?: AbortSignal;
  /** What stands unharmed if the server cannot be reached, for instance "Your figures are still in the fields." */
  kept?: string;
  /** A body that is not JSON, for a contract with `streamedBody`. */
  payload?: Blob;
}

export type CallOptions<C> = Part<'params', ParamsOf<C>> &
  Part<'query', QueryInputOf<C>> &
  Part<'body', BodyInputOf<C>> &
  Common;

type OptionsArgument<C> = object extends CallOptions<C> ? [options?: CallOptions<C>] : [options: CallOptions<C>];

interface LooseOptions extends Common {
  params?: unknown;
  query?: unknown;
  body?: unknown;
}

let csrfToken = '';
let fetchCsrfToken: (() => Promise<string>) | null = null;
const signedOutListeners = new Set<() => void>();

/** Keeps the anti-forgery token that the session reply carries; every writing request sends it. */
export function rememberCsrfToken(token: string): void {
  csrfToken = token;
}

/** How to come by the token for a page that was opened without the server: it is asked for before the first writing request. */
export function fetchCsrfTokenWith(fetchToken: () => Promise<string>): void {
  fetchCsrfToken = fetchToken;
}

/** Headers that a writing request needs when it cannot go through `call` (an upload that reports its progress). */
export function writingHeaders(): Record<string, string> {
  return { 'x-csrf-token': csrfToken };
}

/** Calls the listener whenever the server answers that nobody is signed in; returns how to stop. */
export function onSignedOut(listener: () => void): () => void {
  signedOutListeners.add(listener);
  return () => signedOutListeners.delete(listener);
}

/** The address of a contract with its parameters filled in. Throws a RangeError naming a missing one. */
export function addressOf(path: string, params: unknown, query?: unknown): string {
  const given = new Map(Object.entries((params ?? {}) as Record<string, unknown>));
  const filled = path.replace(/:([A-Za-z]+)/g, (_, name: string) => {
    const value = given.get(name);
    if (value === undefined || value === null) throw new RangeError(`${path} needs ${name}`);
    return encodeURIComponent(plain(name, value));
  });
  const search = new URLSearchParams();
  for (const [name, value] of Object.entries((query ?? {}) as Record<string, unknown>)) {
    if (value !== undefined && value !== null) search.set(name, plain(name, value));
  }
  const tail = search.toString();
  return tail ? `${filled}?${tail}` : filled;
}

/** Reads a refused reply: the server's problem document, or our own words where it sent none; `kept` where it says nothing of that. */
export async function readProblem(response: Response, kept?: string): Promise<ApiError> {
  if (response.status === 401) for (const listener of signedOutListeners) listener();
  const text = await response.text().catch(() => '');
  let parsed: ReturnType<typeof problem.safeParse> | undefined;
  try {
    parsed = problem.safeParse(JSON.parse(text));
  } catch {
    parsed = undefined;
  }
  if (parsed?.success) return new ApiError(kept && !parsed.data.kept ? { ...parsed.data, kept } : parsed.data);
  return new ApiError({
    type: 'about:blank',
    status: response.status,
    title: response.status >= 500 ? 'The server could not answer' : 'The server refused',
    detail: `It answered ${String(response.status)} without saying why.`,
    ...(kept ? { kept } : {}),
    next: 'Try again in a minute. If it happens again, tell your administrator.',
  });
}

/** Parameters are ids, numbers and switches; anything else is a fault of the caller. */
function plain(name: string, value: unknown): string {
  if (typeof value === 'string' || typeof value === 'number' || typeof value === 'boolean') return String(value);
  throw new RangeError(`${name} must be a text, a number or a switch`);
}

function unreachable(options: LooseOptions, writing: boolean): ApiError {
  const offline = typeof navigator !== 'undefined' && !navigator.onLine;
  return new ApiError({
    type: 'about:blank',
    status: 0,
    title: offline ? 'This device is offline' : 'The server cannot be reached',
    // A line that broke on the way back leaves it open whether the change arrived; sending it again does no harm.
    detail: writing
      ? offline
        ? 'Nothing was saved.'
        : 'No answer came: take it as not saved.'
      : 'Nothing new was loaded.',
    kept: options.kept ?? (writing ? 'What you typed is still here.' : 'What you see is what was loaded last.'),
    next: 'Check the connection, then try again.',
  });
}

/**
 * Calls a route as its contract states it and checks the reply against the contract's schema.
 * Throws an ApiError: the server's own problem document, or one that says what was kept when the
 * server is not reached. A request that was aborted throws the abort's own reason.
 */
export async function call<C extends AnyContract>(contract: C, ...[given]: OptionsArgument<C>): Promise<ReplyOf<C>> {
  const options: LooseOptions = given ?? {};
  const writing = contract.method !== 'get';
  const headers: Record<string, string> = { accept: 'application/json' };
  let body: BodyInit | undefined;
  if (options.payload) {
    headers['content-type'] = contract.streamedBody ?? 'application/octet-stream';
    body = options.payload;
  } else if (options.body !== undefined) {
    headers['content-type'] = 'application/json';
    body = JSON.stringify(options.body);
  }
  if (writing) Object.assign(headers, writingHeaders());
  // What a page asks by itself must not keep a session awake that nobody uses.
  if (isInUse()) headers['x-use'] = '1';

  const request: RequestInit = { method: contract.method.toUpperCase(), headers, credentials: 'same-origin' };
  if (body !== undefined) request.body = body;
  if (options.signal) request.signal = options.signal;

  let response: Response;
  let text: string;
  try {
    if (writing && csrfToken === '' && fetchCsrfToken) {
      csrfToken = await fetchCsrfToken().catch((error: unknown) => {
        throw isOutage(error) ? unreachable(options, writing) : error;
      });
      Object.assign(headers, writingHeaders());
    }
    response = await fetch(addressOf(contract.path, options.params, options.query), request);
    if (!response.ok) throw await readProblem(response, options.kept);
    text = await response.text();
  } catch (error) {
    if (error instanceof ApiError || options.signal?.aborted) throw error;
    throw unreachable(options, writing);
  }

  let reply: unknown = null;
  let readable = true;
  try {
    reply = text === '' ? null : JSON.parse(text);
  } catch {
    readable = false;
  }
  const parsed = readable ? contract.reply.safeParse(reply) : undefined;
  if (!parsed?.success) {
    throw new ApiError({
      type: 'about:blank',
      status: response.status,
      title: 'The answer was not understood',
      detail: writing
        ? 'The server may have saved your change.'
        : 'The page and the server may be of different versions.',
      next: 'Reload the page. If it happens again, tell your administrator.',
    });
  }
  return parsed.data as ReplyOf<C>;
}
