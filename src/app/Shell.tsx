import { useCallback, useEffect, useMemo, useRef, useState } from 'react';
import { NavLink, Outlet, ScrollRestoration, useLocation, useNavigation, useParams } from 'react-router-dom';
import type { Permission } from '../../shared/domain/permission.ts';
import { Menu } from '../components/Menu.tsx';
import { PanelBoundary } from '../components/PanelBoundary.tsx';
import { ThemeSwitch } from '../components/ThemeSwitch.tsx';
import { useSession } from '../features/sign-in/session.ts';
import type { SessionSite } from '../features/sign-in/session.ts';
import { SignOutButton } from '../features/sign-in/SignOutButton.tsx';
import { classNames } from '../lib/class-names.ts';
import { lastSite } from '../lib/last-site.ts';
import { paths } from './paths.ts';
import { Shortcuts } from './Shortcuts.tsx';
import { SiteSwitcher } from './SiteSwitcher.tsx';
import { SiteTimes } from './SiteTimes.tsx';
import { UnsavedGuard } from './UnsavedGuard.tsx';

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
      ...(site && may('visit-log:read') ? [{ key: 'l', name: 'Logs', to: paths.visitLogs(site.id) }] : []),
      ...(site && may('arrival-model:read')
        ? [{ key: 'm', name: 'Arrival model', to: paths.arrivalModels(site.id) }]
        : []),
      ...(session.installationPermissions.includes('installation:administer')
        ? [{ key: 'k', name: 'Machine tokens', to: paths.tokens() }]
        : []),
      { key: 'h', name: 'How the numbers are made', to: paths.howNumbersAreMade() },
    ];
  }, [site, session]);

  // A new page is announced and read from its start; the first one leaves the focus alone.
  useEffect(() => {
    if (firstPage.current) firstPage.current = false;
    else mainRef.current?.focus({ preventScroll: true });
  }, [location.pathname]);

  const apart = (
    <>
      {places
        .filter(({ key }) => key !== 't')
        .map(({ key, name, to }) => (
          <NavLink key={key} to={to} className={sideLink}>
            {name}
          </NavLink>
        ))}
      <ThemeSwitch />
    </>
  );

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
      <header className="page-pad flex min-h-14 items-center gap-x-3 pt-1 sm:gap-x-6 print:hidden">
        <SiteSwitcher site={site} sites={session.sites} />
        <nav aria-label="Places along time" className="flex flex-1 flex-wrap items-center gap-x-6">
          {places
            .filter(({ key }) => key === 't')
            .map(({ key, name, to }) => (
              <NavLink
                key={key}
                to={to}
                className={({ isActive }) =>
                  classNames(
                    'inline-flex min-h-11 items-center border-b-[3px] text-body',
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
        <nav aria-label="More" className="hidden items-center gap-6 text-side xl:flex">
          {apart}
          <Menu label={session.person.name}>
            <p className="text-quiet text-ink2">{session.person.email}</p>
            {keysButton}
            <SignOutButton className="mt-3 w-full" />
          </Menu>
        </nav>
        <div className="text-side xl:hidden">
          <Menu label="More">
            <nav aria-label="More" className="flex flex-col items-start">
              {apart}
            </nav>
            {keysButton}
            <p className="mt-2 border-t border-hair pt-3 font-bold">{session.person.name}</p>
            <p className="text-quiet text-ink2">{session.person.email}</p>
            <SignOutButton className="mt-3 w-full" />
          </Menu>
        </div>
      </header>
      {site ? <SiteTimes siteName={site.name} timeZone={site.timeZone} now={session.now} /> : null}
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
