import '@testing-library/jest-dom/vitest';
import { QueryClient, QueryClientProvider } from '@tanstack/react-query';
import { configure, render, screen, waitFor, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import type { ReactElement } from 'react';
import { MemoryRouter, Route, Routes } from 'react-router-dom';
import { afterEach, beforeAll, describe, expect, test, vi } from 'vitest';
import type { AuditChain, AuditEventReply } from '../../../shared/api/audit-log.ts';
import type { PersonReply } from '../../../shared/api/people.ts';
import type { ServerStatus } from '../../../shared/api/server-status.ts';
import type { OwnSession } from '../../../shared/api/session.ts';
import { SessionProvider, type SignedInSession } from '../../../src/features/sign-in/session.ts';
import { AuditPage } from '../../../src/pages/AuditPage.tsx';
import { OwnSessionsPage } from '../../../src/pages/OwnSessionsPage.tsx';
import { PeoplePage } from '../../../src/pages/PeoplePage.tsx';
import { ServerStatusPage } from '../../../src/pages/ServerStatusPage.tsx';

const at = 1_790_000_000;

interface Asked {
  method: string;
  path: string;
  query: URLSearchParams;
  body: unknown;
}

/** Shows a page with a server that answers what the function says; every request is noted. */
function show(page: ReactElement, address: string, answer: (asked: Asked) => { status?: number; body?: object }) {
  const requests: Asked[] = [];
  vi.stubGlobal('fetch', (target: string, init: RequestInit) => {
    const { pathname, searchParams } = new URL(target, 'http://shoalmark.test');
    const body: unknown = typeof init.body === 'string' ? JSON.parse(init.body) : undefined;
    const asked = { method: init.method ?? '', path: pathname, query: searchParams, body };
    requests.push(asked);
    const { status = 200, body: reply } = answer(asked);
    return Promise.resolve(new Response(reply === undefined ? null : JSON.stringify(reply), { status }));
  });
  render(
    <QueryClientProvider client={new QueryClient({ defaultOptions: { queries: { retry: false } } })}>
      <SessionProvider value={{ sites: [] } as unknown as SignedInSession}>
        <MemoryRouter initialEntries={[address]}>
          <Routes>
            <Route path={address.split('?')[0]} element={page} />
            <Route path="/people/:personId" element={<p>The page of one person</p>} />
          </Routes>
        </MemoryRouter>
      </SessionProvider>
    </QueryClientProvider>,
  );
  const sent = () => requests.filter(({ method }) => method !== 'GET');
  return { requests, sent, user: userEvent.setup() };
}

// Whole pages are shown: on a busy machine that takes longer than the second that is waited otherwise.
configure({ asyncUtilTimeout: 15_000 });
beforeAll(() => {
  HTMLDialogElement.prototype.showModal = function (this: HTMLDialogElement) {
    this.open = true;
  };
  HTMLDialogElement.prototype.close = function (this: HTMLDialogElement) {
    this.open = false;
    this.dispatchEvent(new Event('close'));
  };
});
afterEach(() => {
  vi.unstubAllGlobals();
});

describe('People', () => {
  const person: PersonReply = {
    ...{ id: 'p1', name: 'Ada Moss', email: 'ada@people.test', emailVerified: true, lastSignInAt: at },
    ...{ byGroups: [], identityGroups: [], sessions: 1 },
    roles: [
      { id: 'm1', role: 'charge', siteId: 's', groupId: null, placeName: 'Wrenhythe', endsAt: null, ended: false },
      { id: 'm2', role: 'steward', siteId: 's', groupId: null, placeName: 'Wrenhythe', endsAt: at, ended: true },
    ],
  };
  const everybody = { people: [person, { ...person, id: 'p2', name: 'Bo Reed', roles: [] }] };
  const choices = { groupRoles: [], sites: [{ id: 's', name: 'Wrenhythe', timeZone: 'UTC' }], groups: [] };
  const answer = ({ method, query }: Asked) => {
    if (method === 'POST') return { status: 201, body: { person: { ...person, id: 'p3' }, mailed: true } };
    const people = everybody.people.filter(({ name }) => name.includes(query.get('search') ?? ''));
    return { body: { people, total: people.length, ...choices } };
  };

  test('lists what each holds now, not what has ended, and finds by name', async () => {
    const { user } = show(<PeoplePage />, '/people', answer);
    expect(await screen.findByText('Charge nurse, Wrenhythe')).toBeVisible();
    expect(screen.queryByText(/steward, Wrenhythe/i)).toBeNull();
    await user.type(screen.getByLabelText('Name or address'), 'Bo{Enter}');
    await waitFor(() => {
      expect(screen.queryByText('Ada Moss')).toBeNull();
    });
    expect(screen.getByRole('heading', { level: 1 })).toHaveTextContent('1 person found');
  });

  test('an invitation is checked before it is sent, then leads to the roles', async () => {
    const { sent, user } = show(<PeoplePage />, '/people', answer);
    await user.click(await screen.findByRole('button', { name: 'Invite and give roles' }));
    expect(screen.getByText('Enter the person’s name.')).toBeVisible();
    expect(sent()).toEqual([]);
    const form = within(screen.getByRole('region', { name: 'Invite somebody' }));
    await user.type(form.getByLabelText('Name'), 'Cy Vale');
    await user.type(form.getByLabelText('E-mail address'), 'cy@people.test');
    await user.click(screen.getByRole('button', { name: 'Invite and give roles' }));
    expect(await screen.findByText('The page of one person')).toBeVisible();
    expect(sent()[0]).toMatchObject({ path: '/api/people', body: { name: 'Cy Vale', email: 'cy@people.test' } });
  });

  test('a list that cannot be had says so and can be asked for again', async () => {
    let down = true;
    const { user } = show(<PeoplePage />, '/people', (asked) => {
      if (down)
        return { status: 503, body: { type: 'about:blank', title: 'Not ready', status: 503, detail: 'Later.' } };
      return answer(asked);
    });
    const again = await screen.findByRole('button', { name: /again/i });
    down = false;
    await user.click(again);
    expect(await screen.findByText('Ada Moss')).toBeVisible();
  });
});

describe('Audit trail', () => {
  const event: AuditEventReply = {
    ...{ id: 7, at, actor: 'Ada Moss', siteId: 's', siteName: 'Wrenhythe', event: 'census.entered', subject: 'c' },
    ...{ detail: {}, address: '10.0.0.1', requestId: null, note: { state: 'kept', text: 'Ask for two beds' } },
  };
  const chain: AuditChain = { whole: true, rows: 7, head: 'ab'.repeat(32), fault: null, checkedAt: at };
  const answer =
    (of: AuditChain) =>
    ({ method, path }: Asked) => {
      if (method === 'POST') return { status: 204 };
      if (path.endsWith('-chain')) return { body: of };
      return { body: { events: [event], before: null, sites: [{ id: 's', name: 'Wrenhythe' }] } };
    };

  test('says that the chain is whole, with the newest digest', async () => {
    show(<AuditPage />, '/audit', answer(chain));
    expect(await screen.findByText('Chain verified')).toBeVisible();
    expect(await screen.findByText('Ada Moss')).toBeVisible();
  });

  test('a broken chain is told in words, with where and what to do', async () => {
    show(<AuditPage />, '/audit', answer({ ...chain, whole: false, fault: { eventId: 3, kind: 'row altered' } }));
    const notice = await screen.findByText('The trail is not whole: row altered at row 3.');
    expect(notice).toBeVisible();
    expect(screen.getByText(/Keep the file as it is/)).toBeVisible();
  });

  test('a note goes only with a reason', async () => {
    const { sent, user } = show(<AuditPage />, '/audit', answer(chain));
    await user.click(await screen.findByRole('button', { name: 'Take the note of row 7 out' }));
    await user.click(screen.getByRole('button', { name: 'Take the text out' }));
    expect(screen.getByText('Say why, in 3 characters or more.')).toBeVisible();
    expect(sent()).toEqual([]);
    await user.type(screen.getByLabelText('Reason'), 'It named a patient');
    await user.click(screen.getByRole('button', { name: 'Take the text out' }));
    await waitFor(() => {
      expect(sent()).toHaveLength(1);
    });
    expect(sent()[0]).toMatchObject({ body: { reason: 'It named a patient' } });
    expect(sent()[0].path).toContain('/7/');
  });

  test('the filter in the address is what is asked for', async () => {
    const { requests } = show(<AuditPage />, '/audit?event=census&actor=Ada', answer(chain));
    await screen.findByText('Ada Moss');
    const asked = requests.find(({ path }) => !path.endsWith('-chain'));
    expect(Object.fromEntries(asked?.query ?? [])).toMatchObject({ event: 'census', actor: 'Ada' });
  });
});

describe('Server status', () => {
  const status: ServerStatus = {
    ...{ now: at, startedAt: at - 7200, softwareVersion: '1', engineVersion: 'e', nodeVersion: 'v20' },
    migrations: { done: 15, newest: 'TrackRecordAhead' },
    database: { bytes: 2e6, logBytes: 0 },
    disk: { freeBytes: 5e10, totalBytes: 1e11 },
    ...{ longestStallMilliseconds: 12, memoryBytes: 2e8 },
    queue: {
      ...{ queued: 0, running: 0, oldestWaitsSince: null },
      failed: [
        {
          ...{ id: 'j1', kind: 'backup.make', title: 'Backup', siteName: null, error: 'The server’s disk is full.' },
          ...{ attempts: 3, endedAt: at, mayRetry: true },
        },
      ],
    },
    backups: {
      ...{ folder: '/backups', everyHours: 24, keep: 14, underWay: false },
      files: [{ name: 'shoalmark-20260921-080000.sqlite', madeAt: at - 3600, bytes: 1e6, rows: 99 }],
    },
    mail: { set: true, from: 'Shoalmark <ed@site.test>', lastSentAt: null, waiting: 0, lastFailure: null },
  };
  const answer = ({ method, path }: Asked) => {
    if (method === 'GET') return { body: status };
    if (path.endsWith('/backups')) return { status: 202, body: { jobId: 'j2' } };
    if (path.includes('mail')) return { body: { to: 'ada@people.test' } };
    return { status: 204 };
  };

  test('failed work says why and is tried again; a backup and a test message are asked for', async () => {
    const { sent, user } = show(<ServerStatusPage />, '/status', answer);
    expect(await screen.findByText('The server’s disk is full.')).toBeVisible();
    await user.click(screen.getByRole('button', { name: 'Try “Backup” again' }));
    await user.click(screen.getByRole('button', { name: 'Make a backup now' }));
    await user.click(screen.getByRole('button', { name: 'Send a test message to me' }));
    expect(await screen.findByText(/The mail server took a message for/)).toHaveTextContent('ada@people.test');
    expect(sent().map(({ path }) => path)).toEqual([
      expect.stringContaining('/j1/') as string,
      '/api/server-status/backups',
      expect.stringContaining('mail') as string,
    ]);
  });

  test('a test message that the mail server refuses says what happened', async () => {
    const problem = { type: 'about:blank', title: 'Not sent', status: 502, detail: 'The mail server does not answer.' };
    const { user } = show(<ServerStatusPage />, '/status', (asked) =>
      asked.path.includes('mail') ? { status: 502, body: problem } : answer(asked),
    );
    await user.click(await screen.findByRole('button', { name: 'Send a test message to me' }));
    expect(await screen.findByText(/The mail server does not answer/)).toBeVisible();
  });
});

describe('Where one is signed in', () => {
  const own: OwnSession = {
    ...{ id: 'a', device: 'Firefox on Windows', address: '10.0.0.1', signedInAt: at, usedAt: at },
    ...{ locked: false, current: true },
  };

  test('every other session can be ended, this one cannot; the list then no longer has it', async () => {
    let sessions = [own, { ...own, id: 'b', device: 'Safari on a Mac', current: false, locked: true }];
    const { sent, user } = show(<OwnSessionsPage />, '/sessions', ({ method }) => {
      if (method === 'GET') return { body: { sessions } };
      sessions = [own];
      return { status: 204 };
    });
    expect(await screen.findByRole('heading', { name: 'Signed in on 2 devices' })).toBeVisible();
    expect(screen.getByText(/locked since/)).toBeVisible();
    const ends = screen.getAllByRole('button', { name: /^End the session of/ });
    expect(ends).toHaveLength(1);
    await user.click(ends[0]);
    expect(await screen.findByRole('heading', { name: 'Signed in on 1 device' })).toBeVisible();
    expect(sent().map(({ path }) => path)).toEqual(['/api/own-sessions/b/ending']);
  });
});
