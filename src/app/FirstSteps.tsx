import { useState } from 'react';
import type { ReactNode } from 'react';
import { Link } from 'react-router-dom';
import { roleNames, type Role } from '../../shared/domain/permission.ts';
import { Button } from '../components/Button.tsx';
import { paths } from './paths.ts';

const storageKey = (personId: string) => `first-steps-done:${personId}`;

function isDone(personId: string): boolean {
  try {
    return localStorage.getItem(storageKey(personId)) === 'yes';
  } catch {
    return false;
  }
}

function Go({ to, children }: { to: string; children: ReactNode }) {
  return (
    <Link to={to} className="link font-bold text-ink">
      {children}
    </Link>
  );
}

/** What each role comes to do, in three steps. */
function stepsOf(role: Role, siteId: string): ReactNode[] {
  switch (role) {
    case 'charge':
      return [
        <>
          Count on <Go to={paths.tonight(siteId)}>Tonight</Go>: type present, waiting and boarding of each area. Enter
          saves, and the outlook is computed anew.
        </>,
        <>
          Read the sentence at the top, then the hours: number, word and mark. A bar over an hour is the area’s limit
          passed.
        </>,
        <>
          Say what you did under the area, and print the <Go to={paths.handover(siteId)}>handover sheet</Go>.
        </>,
      ];
    case 'operations':
      return [
        <>
          <Go to={paths.weekAhead(siteId)}>Week ahead</Go> has the gaps, worst first and by last chance to book.
        </>,
        <>
          Try plans in <Go to={paths.whatIf(siteId)}>What if</Go>, and set{' '}
          <Go to={paths.staffedBeds(siteId)}>staffed beds</Go>.
        </>,
        <>
          Approve an <Go to={paths.arrivalModels(siteId)}>arrival model</Go> that somebody else has fitted; limits and
          calendar stand in <Go to={paths.siteSettings(siteId)}>Site settings</Go>.
        </>,
      ];
    case 'steward':
      return [
        <>
          <Go to={paths.newVisitLog(siteId)}>Load a visit log</Go>: it is screened on this computer, and nothing that
          identifies a patient leaves it.
        </>,
        <>Say what its times mean; the answers are remembered for the next file.</>,
        <>
          Fit a model in <Go to={paths.arrivalModels(siteId)}>Arrival model</Go> and read its diagnostics. An operations
          manager approves it.
        </>,
      ];
    case 'executive':
      return [
        <>
          The weekly brief comes by mail; <Go to={paths.briefs(siteId)}>Briefs</Go> keeps each one as it was sent.
        </>,
        <>
          <Go to={paths.weekAhead(siteId)}>Week ahead</Go> says which shifts run short, and what would cover them.
        </>,
        <>
          <Go to={paths.trackRecord(siteId)}>Track record</Go> says how far to trust it.
        </>,
      ];
    case 'administrator':
      return [
        <>
          Make <Go to={paths.installationSites()}>sites and areas</Go>.
        </>,
        <>
          Give <Go to={paths.people()}>people</Go> their roles, site by site.
        </>,
        <>
          Look at <Go to={paths.serverStatus()}>Server status</Go> for jobs, mail and backups.
        </>,
      ];
  }
}

/** For somebody new: one line under the head of the page, which opens, and which they can put away for good. */
export function FirstSteps({ personId, roles, siteId }: { personId: string; roles: readonly Role[]; siteId: string }) {
  const [done, setDone] = useState(() => isDone(personId));
  if (done || roles.length === 0) return null;
  return (
    <details className="page-pad text-side text-ink2 print:hidden">
      <summary className="link inline-block min-h-6 cursor-pointer font-semibold">First time here?</summary>
      <div className="mt-1 grid gap-3 border-l-4 border-hair py-1 pl-3">
        {roles.map((role) => (
          <section key={role}>
            <h2 className="font-bold text-ink">{roleNames[role]}: what you do here</h2>
            <ol className="ml-5 list-decimal">
              {stepsOf(role, siteId).map((step, index) => (
                <li key={index}>{step}</li>
              ))}
            </ol>
          </section>
        ))}
        <p>
          <Button
            look="quiet"
            onClick={() => {
              try {
                localStorage.setItem(storageKey(personId), 'yes');
              } catch {
                // Without storage it comes back with the next page load.
              }
              setDone(true);
            }}
          >
            Do not show this again
          </Button>
        </p>
      </div>
    </details>
  );
}
