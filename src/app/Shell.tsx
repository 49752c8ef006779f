import { useCallback, useEffect, useMemo, useRef, useState } from 'react';
import { NavLink, Outlet, ScrollRestoration, useLocation, useNavigation, useParams } from 'react-router-dom';
import type { Permission } from '../../shared/domain/permission.ts';
import { Menu } from '../components/Menu.tsx';
import { PanelBoundary } from '../components/PanelBoundary.tsx';
import { ThemeSwitch } from '../components/ThemeSwitch.tsx';
import { useSession } from '../features/sign-in/session.ts';
import type { SessionSite } from '../features/sign-in/session.ts';
import { LockButton } from '../features/sign-in/LockButton.tsx';
import { SignOutButton } from '../features/sign-in/SignOutButton.tsx';
import { SignOutEverywhere } from '../features/sign-in/SignOutEverywhere.tsx';
import { classNames } from '../lib/class-names.ts';
import { lastSite } from '../lib/last-site.ts';
import { FirstSteps } from './FirstSteps.tsx';
import { paths } from './paths.ts';
import { Shortcuts } from './Shortcuts.tsx';
import { SiteSwitcher } from './SiteSwitcher.tsx';
import { SiteTimes } from './SiteTimes.tsx';
import { UnsavedGuard } from './UnsavedGuard.tsx';

/** The letters of the places that lie along time; the others stand apart. */
const alongTime = new Set(['t', 'w', 'i', 'r']);
/** Of those apart, what stands in the head of a wide screen; the rest is one press away. */
const inHead = new Set(['l', 'm', 'b', 'e']);
/** The same for somebody who only administers. */
const inHeadOfAdministration = new Set(['j', 'p', 'v', 'a']);

function useCurrentSite(): SessionSite | undefined {
  const { siteId } = useParams();
  const { sites } = useSession();
  return sites.find((site) => site.id === (siteId ?? lastSite())) ?? sites[0];
}

const sideLink = ({ isActive }: { isActive: boolean }) =>
  classNames(
    'inline-flex min-h-11 items-center',
    isActive ? 'font-extrabold text-ink' : 'font-semibold text-ink2 hover:text-ink',
  );

/** Every page's frame: the name, the places along time, what stands apart, and whose session it is. */
export function Shell() {
  const session = useSession();
  const site = useCurrentSite();
  const location = useLocation();
  const navigation = useNavigation();
  const mainRef = useRef<HTMLElement>(null);
  const firstPage = useRef(true);
  const [listsKeys, setListsKeys] = useState(false);
  const listKeys = useCallback(() => setListsKeys(true), []);

  // Tonight first, then what stands apart; each with the letter that follows "g".
  const places = useMemo(() => {
    const may = (permission: Permission) => site?.permissions.includes(permission) ?? false;
    return [
      ...(site && may('outlook:read') ? [{ key: 't', name: 'Tonight', to: paths.tonight(site.id) }] : []),
      ...(site && may('outlook:read') ? [{ key: 'w', name: 'Week ahead', to: paths.weekAhead(site.id) }] : []),
      ...(site && may('scenario:read') ? [{ key: 'i', name: 'What if', to: paths.whatIf(site.id) }] : []),
      ...(site && may('outlook:read') ? [{ key: 'r', name: 'Track record', to: paths.trackRecord(site.id) }] : []),
      ...(site && may('visit-log:read') ? [{ key: 'l', name: 'Logs', to: paths.visitLogs(site.id) }] : []),
      ...(site && may('arrival-model:read')
        ? [{ key: 'm', name: 'Arrival model', to: paths.arrivalModels(site.id) }]
        : []),
      ...(site && may('outlook:read')
        ? [
            { key: 'b', name: 'Staffed beds', to: paths.staffedBeds(site.id) },
            { key: 's', name: 'Site settings', to: paths.siteSettings(site.id) },
          ]
        : []),
      ...(site && may('brief:read') ? [{ key: 'e', name: 'Briefs', to: paths.briefs(site.id) }] : []),
      ...(session.installationPermissions.includes('installation:administer')
        ? [
            { key: 'j', name: 'Sites', to: paths.installationSites() },
            { key: 'p', name: 'People', to: paths.people() },
            { key: 'k', name: 'Machine tokens', to: paths.tokens() },
            { key: 'v', name: 'Server status', to: paths.serverStatus() },
          ]
        : []),
      ...(session.installationPermissions.includes('audit-log:read-all')
        ? [{ key: 'a', name: 'Audit trail', to: paths.audit() }]
        : site && may('audit-log:read-site')
          ? [{ key: 'a', name: 'Audit trail', to: paths.siteAudit(site.id) }]
          : []),
      { key: 'h', name: 'How the numbers are made', to: paths.howNumbersAreMade() },
    ];
  }, [site, session]);

  // A new page is announced and read from its start; the first one leaves the focus alone.
  useEffect(() => {
    if (firstPage.current) firstPage.current = false;
    else mainRef.current?.focus({ preventScroll: true });
  }, [location.pathname]);

  const first = places.some(({ key }) => alongTime.has(key)) ? inHead : inHeadOfAdministration;
  const apart = (inFirst: boolean) =>
    places
      .filter(({ key }) => !alongTime.has(key) && first.has(key) === inFirst)
      .map(({ key, name, to }) => (
        <NavLink key={key} to={to} className={sideLink}>
          {name}
        </NavLink>
      ));

  const keysButton = (
    <button type="button" className="link block min-h-11 cursor-pointer font-semibold text-ink2" onClick={listKeys}>
      Keyboard shortcuts
    </button>
  );

  return (
    <div className="flex min-h-dvh flex-col">
      <a
        href="#main"
        className="absolute left-2 top-2 z-40 -translate-y-20 rounded-button bg-act px-4 py-2 font-bold text-act-ink focus:translate-y-0"
        onClick={(event) => {
          event.preventDefault();
          mainRef.current?.focus();
          mainRef.current?.scrollIntoView();
        }}
      >
        Skip to the page
      </a>
      <header className="page-pad flex min-h-14 items-center gap-x-3 pt-1 max-sm:flex-wrap sm:gap-x-6 print:hidden">
        <SiteSwitcher site={site} sites={session.sites} />
        <nav
          aria-label="Places along time"
          className="flex flex-1 items-center gap-x-6 whitespace-nowrap max-sm:order-last max-sm:w-full max-sm:flex-none max-sm:justify-between max-sm:gap-x-2 sm:flex-wrap"
        >
          {places
            .filter(({ key }) => alongTime.has(key))
            .map(({ key, name, to }) => (
              <NavLink
                key={key}
                to={to}
                className={({ isActive }) =>
                  classNames(
                    'inline-flex min-h-11 items-center border-b-[3px] text-body max-[24rem]:font-stretch-[78%]',
                    isActive
                      ? 'border-act font-extrabold text-ink'
                      : 'border-transparent font-bold text-ink2 hover:text-ink',
                  )
                }
              >
                {name}
              </NavLink>
            ))}
        </nav>
        <nav aria-label="Beside time" className="hidden items-center gap-6 text-side xl:flex">
          {apart(true)}
        </nav>
        <div className="text-side max-sm:ml-auto">
          <Menu label="More">
            <nav aria-label="More" className="flex flex-col items-start">
              <span className="contents xl:hidden">{apart(true)}</span>
              {apart(false)}
            </nav>
            <ThemeSwitch />
            {keysButton}
            <p className="mt-2 border-t border-hair pt-3 font-bold">{session.person.name}</p>
            <p className="text-quiet text-ink2">{session.person.email}</p>
            <NavLink to={paths.ownSessions()} className={sideLink}>
              Where you are signed in
            </NavLink>
            <LockButton className="mt-3 w-full" />
            <SignOutButton className="mt-3 w-full" />
            <SignOutEverywhere />
          </Menu>
        </div>
      </header>
      {site ? <SiteTimes siteName={site.name} timeZone={site.timeZone} now={session.now} /> : null}
      <FirstSteps
        personId={session.person.id}
        roles={[...new Set([...(site?.roles ?? []), ...session.installationRoles])]}
        siteId={site?.id ?? ''}
      />
      <main
        id="main"
        ref={mainRef}
        tabIndex={-1}
        aria-busy={navigation.state === 'loading' || undefined}
        className="flex-1"
      >
        <PanelBoundary key={location.pathname}>
          <Outlet />
        </PanelBoundary>
      </main>
      <footer className="page-pad pt-4 pb-5 text-quiet text-ink2">
        <b className="text-ink">Planning aid.</b> Not for decisions about any individual patient. Follow your hospital’s
        clinical governance, escalation policy and local law; a licensed clinician’s judgement comes first.
      </footer>
      <Shortcuts places={places} open={listsKeys} onOpen={listKeys} onClose={() => setListsKeys(false)} />
      <UnsavedGuard />
      <ScrollRestoration />
    </div>
  );
}
