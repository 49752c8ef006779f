import { QueryClient } from '@tanstack/react-query';
import { ApiError } from '../lib/api-error.ts';

/** The one query cache. A refused request is not asked again; an unreachable server is, twice. */
export function makeQueryClient(): QueryClient {
  return new QueryClient({
    defaultOptions: {
      queries: {
        // Otherwise a request made offline waits without a word; it must fail and say so.
        networkMode: 'always',
        staleTime: 10_000,
        retry: (failures, error) =>
          failures < 2 && error instanceof ApiError && (error.status === 0 || error.status >= 500),
      },
      mutations: { networkMode: 'always', retry: false },
    },
  });
}
