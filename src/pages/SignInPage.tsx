import { Navigate, useSearchParams } from 'react-router-dom';
import type { SignInProblem } from '../../shared/api/session.ts';
import { paths } from '../app/paths.ts';
import { Notice } from '../components/Notice.tsx';
import { useDocumentTitle } from '../components/PageHead.tsx';
import { ThemeSwitch } from '../components/ThemeSwitch.tsx';
import { SignInRibbon } from '../features/sign-in/SignInRibbon.tsx';
import { useSessionQuery } from '../features/sign-in/session.ts';

/** Where to come back to: an address within the product, never another site. */
export function safeReturnTo(given: string | null): string {
  return given && /^\/(?![/\\])/.test(given) ? given : '/';
}

const problems: Record<SignInProblem, { title: string; text: string }> = {
  unreachable: {
    title: 'The hospital account cannot be reached',
    text: 'The service that confirms who you are does not answer. Try again in a few minutes; if it stays, tell your administrator.',
  },
  expired: {
    title: 'That sign-in is over',
    text: 'It took longer than a quarter of an hour, or was finished before. Nothing is lost: start it again.',
  },
  refused: {
    title: 'Signing in did not work',
    text: 'The hospital account did not confirm who you are. Try again; if it stays, tell your administrator.',
  },
  fault: {
    title: 'Signing in could not be finished',
    text: 'This server could not finish it, and the fault is ours. You are not signed in, and nothing was changed. Try again in a minute; if it stays, tell your administrator.',
  },
  busy: {
    title: 'Too many sign-ins at once',
    text: 'More people tried to sign in within a minute than the server takes. Wait a minute and try again.',
  },
};

/** Sign-in by the hospital account. A link, since a form that is sent on elsewhere is refused by the content policy. */
export function SignInPage() {
  useDocumentTitle('Sign in');
  const [search] = useSearchParams();
  const returnTo = safeReturnTo(search.get('returnTo'));
  const problem = (problems as Partial<Record<string, { title: string; text: string }>>)[search.get('problem') ?? ''];
  const session = useSessionQuery();
  if (session.data?.person) return <Navigate to={returnTo} replace />;
  return (
    <main className="min-h-dvh">
      <SignInRibbon />
      <div className="page-pad max-w-[26.5rem] pb-10">
        <h1 className="text-headline-phone">Sign in</h1>
        <p className="mt-1 text-lede text-ink2">Emergency department arrival forecasts and bed planning.</p>
        {problem ? (
          <Notice kind="caution" className="mt-5" title={problem.title}>
            <p>{problem.text}</p>
            {session.data?.administratorContact ? <p>Administrator: {session.data.administratorContact}</p> : null}
          </Notice>
        ) : null}
        <a
          href={session.data?.locked ? paths.startFreshSignIn(returnTo) : paths.startSignIn(returnTo)}
          className="mt-6 flex min-h-13 items-center justify-center rounded-button bg-act px-5 text-body font-extrabold text-act-ink hover:bg-act-strong"
        >
          Continue with your hospital account
        </a>
        <p className="mt-6 text-quiet text-ink2">
          <b className="text-ink">Planning aid.</b> Not for decisions about any individual patient. Nothing here
          identifies one, and no figures are shown before you sign in.
        </p>
        <ThemeSwitch className="link mt-4 min-h-11 cursor-pointer text-quiet font-semibold text-ink2" />
      </div>
    </main>
  );
}
