import { paths } from '../app/paths.ts';
import { SignInRibbon } from '../features/sign-in/SignInRibbon.tsx';

/** Shown when the session ended or locked itself while a page was open. */
export function SignedOutPage({ returnTo, locked }: { returnTo: string; locked: boolean }) {
  return (
    <main className="min-h-dvh">
      <SignInRibbon />
      <div className="page-pad max-w-[30rem] pb-10">
        <h1 className="text-headline-phone">{locked ? 'This screen is locked.' : 'You are signed out.'}</h1>
        <p className="mt-1 text-lede text-ink2">
          {locked
            ? 'It was left alone for a while, or somebody locked it. The hospital account asks again who you are; anybody with a role here may sign in.'
            : 'The session ended, perhaps because it had lasted its full time.'}{' '}
          Nothing was saved since; a census that you had typed is put back into its fields on this device for a quarter
          of an hour.
        </p>
        <a
          href={locked ? paths.startFreshSignIn(returnTo) : paths.startSignIn(returnTo)}
          className="mt-6 flex min-h-13 items-center justify-center rounded-button bg-act px-5 text-body font-extrabold text-act-ink hover:bg-act-strong"
        >
          {locked ? 'Unlock with your hospital account' : 'Sign in and come back to this page'}
        </a>
      </div>
    </main>
  );
}
