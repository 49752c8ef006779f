import { isRouteErrorResponse, useRouteError } from 'react-router-dom';
import { Notice, ProblemNotice } from '../components/Notice.tsx';
import { Button } from '../components/Button.tsx';
import { useDocumentTitle } from '../components/PageHead.tsx';
import { NotFoundPage } from '../pages/NotFoundPage.tsx';

/** What stands in place of a page that failed to load or to draw. */
export function ErrorPage() {
  const error = useRouteError();
  useDocumentTitle('Something went wrong');
  if (isRouteErrorResponse(error) && error.status === 404) return <NotFoundPage />;
  if (error instanceof TypeError && /import/i.test(error.message)) {
    // A page that was opened before an update asks for a part that the new version has under another name.
    return (
      <main className="page-pad mx-auto max-w-3xl py-16">
        <Notice kind="caution" title="This part of the product could not be loaded" live>
          <p>
            The connection failed, or Shoalmark was updated since this page was opened.{' '}
            <b className="text-ink">What was saved is unchanged.</b> Reload the page.
          </p>
          <Button look="second" className="mt-2" onClick={() => window.location.reload()}>
            Reload
          </Button>
        </Notice>
      </main>
    );
  }
  return (
    <main className="page-pad mx-auto max-w-3xl py-16">
      <ProblemNotice error={error} onRetry={() => window.location.reload()} />
    </main>
  );
}
