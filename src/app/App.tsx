import { QueryClientProvider } from '@tanstack/react-query';
import { useState } from 'react';
import { RouterProvider } from 'react-router-dom';
import { makeQueryClient } from './query-client.ts';
import { makeRouter } from './router.tsx';
import { Announcements } from './Announcements.tsx';

/** The client: query cache and pages. */
export function App() {
  const [queryClient] = useState(makeQueryClient);
  const [router] = useState(makeRouter);
  return (
    <QueryClientProvider client={queryClient}>
      <RouterProvider router={router} />
      <Announcements />
    </QueryClientProvider>
  );
}
