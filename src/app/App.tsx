import { QueryClientProvider, noop, type QueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { RouterProvider } from 'react-router-dom';
import { sessionQuery } from '../features/sign-in/session.ts';
import { makeQueryClient } from './query-client.ts';
import { makeRouter } from './router.tsx';
import { Announcements } from './Announcements.tsx';

/** The query cache, with the question who is signed in under way while the first page's code is fetched. */
function startQueries(): QueryClient {
  const queryClient = makeQueryClient();
  // The page asks again and tells what went wrong.
  queryClient.query(sessionQuery).catch(noop);
  return queryClient;
}

/** The client: query cache and pages. */
export function App() {
  const [queryClient] = useState(startQueries);
  const [router] = useState(makeRouter);
  return (
    <QueryClientProvider client={queryClient}>
      <RouterProvider router={router} />
      <Announcements />
    </QueryClientProvider>
  );
}
