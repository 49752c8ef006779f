import { isRouteErrorResponse, useRouteError } from 'react-router-dom';
import { ProblemNotice } from '../components/Notice.tsx';
import { useDocumentTitle } from '../components/PageHead.tsx';
import { NotFoundPage } from '../pages/NotFoundPage.tsx';

/** What stands in place of a page that failed to load or to draw. */
export function ErrorPage() {
  const error = useRouteError();
  useDocumentTitle('Something went wrong');
  if (isRouteErrorResponse(error) && error.status === 404) return <NotFoundPage />;
  return (
    <main className="page-pad mx-auto max-w-3xl py-16">
      <ProblemNotice error={error} onRetry={() => window.location.reload()} />
    </main>
  );
}
