import { Mark } from '../components/Mark.tsx';
import { useDocumentTitle } from '../components/PageHead.tsx';
import { ThemeSwitch } from '../components/ThemeSwitch.tsx';
import { useSession } from '../features/sign-in/session.ts';
import { SignOutButton } from '../features/sign-in/SignOutButton.tsx';

/** For a person without a role at any site: says so and whom to ask. */
export function NoRolePage() {
  const { person, administratorContact } = useSession();
  useDocumentTitle('No role yet');
  return (
    <main className="page-pad mx-auto max-w-[46rem] py-10">
      <div className="flex items-center gap-3">
        <Mark className="h-9 w-9" />
        <span className="text-section -tracking-[0.01em] [font-weight:850]">Shoalmark</span>
      </div>
      <h1 className="mt-10 text-headline-phone md:text-headline">You have no role here yet.</h1>
      <div className="mt-3 text-lede text-ink2">
        <p>
          You are signed in as <b className="text-ink">{person.name}</b> ({person.email}), and nobody has given you a
          role at a site. Ask{' '}
          {administratorContact ? (
            <b className="text-ink">{administratorContact}</b>
          ) : (
            'the administrator of this installation'
          )}{' '}
          for one: say at which site you work and as what, for instance charge nurse or data steward.
        </p>
      </div>
      <div className="mt-6 flex items-center gap-6">
        <SignOutButton />
        <ThemeSwitch />
      </div>
    </main>
  );
}
