import type { SignInProblem } from '../../shared/api/session.ts';

/** Only a path of this application may be returned to; never another host. */
export function localPath(path: unknown): string {
  if (typeof path !== 'string' || !/^\/(?!\/)[^\\\p{Cc}]*$/u.test(path)) return '/';
  return path;
}

/** The sign-in page with what went wrong; where the person was going stays in the address. */
export function problemPage(problem: SignInProblem, returnTo = '/'): string {
  const search = new URLSearchParams({ problem, ...(returnTo === '/' ? {} : { returnTo }) });
  return `/sign-in?${search.toString()}`;
}
