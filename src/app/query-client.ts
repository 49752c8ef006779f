import { MutationCache, QueryClient } from '@tanstack/react-query';
import { announce } from '../lib/announce.ts';
import { ApiError } from '../lib/api-error.ts';

declare module '@tanstack/react-query' {
  interface Register {
    /** What is told in passing once a change came through; nothing where the page itself shows it. */
    mutationMeta: { done?: string };
  }
}

/** The one query cache. A refused request is not asked again; an unreachable server is, twice. */
export function makeQueryClient(): QueryClient {
  return new QueryClient({
    mutationCache: new MutationCache({
      onSuccess: (_reply, _given, _kept, { meta }) => {
        if (meta?.done !== undefined) announce(meta.done);
      },
    }),
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
