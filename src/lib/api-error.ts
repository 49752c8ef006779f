import type { Problem } from '../../shared/api/common.ts';

type Fault = NonNullable<Problem['faults']>[number];

/**
 * Why a request was not answered as hoped, in words for the person who made it.
 * `status` is 0 when the server was never reached.
 */
export class ApiError extends Error {
  readonly status: number;
  readonly title: string;
  readonly detail: string;
  /** What was kept: the person must never wonder whether their typing is gone. */
  readonly kept: string | undefined;
  /** What to do next. */
  readonly next: string | undefined;
  readonly faults: readonly Fault[];
  readonly requestId: string | undefined;

  constructor(problem: Problem) {
    super(`${problem.title}: ${problem.detail}`);
    this.name = 'ApiError';
    this.status = problem.status;
    this.title = problem.title;
    this.detail = problem.detail;
    this.kept = problem.kept;
    this.next = problem.next;
    this.faults = problem.faults ?? [];
    this.requestId = problem.requestId;
  }

  /** The message of the fault at a field, by its dotted path in the request's body. */
  faultAt(path: string): string | undefined {
    return this.faults.find((fault) => fault.at === path)?.message;
  }
}

/** Any thrown value as an ApiError, so that every place can say what happened in the same form. */
export function asApiError(error: unknown): ApiError {
  if (error instanceof ApiError) return error;
  return new ApiError({
    type: 'about:blank',
    status: 0,
    title: 'Something on this page went wrong',
    detail: error instanceof Error ? error.message : String(error),
    next: 'Try again. If it happens again, reload the page and tell your administrator.',
  });
}

/** True where nobody answered, or only what stands before the server: nothing was refused, and it may pass. */
export function isOutage(error: unknown): boolean {
  return error instanceof ApiError && [0, 502, 503, 504].includes(error.status);
}
