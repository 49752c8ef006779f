import '@testing-library/jest-dom/vitest';
import { QueryClient, QueryClientProvider } from '@tanstack/react-query';
import { render, screen, waitFor, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { MemoryRouter, Route, Routes } from 'react-router-dom';
import { afterEach, beforeAll, expect, test, vi } from 'vitest';
import type { MachineToken } from '../../../shared/api/tokens.ts';
import { SessionProvider, type SignedInSession } from '../../../src/features/sign-in/session.ts';
import { TokensPage } from '../../../src/pages/TokensPage.tsx';

const secret = `shoalmark_${'x'.repeat(43)}`;
const site = { id: 'site-1', name: 'Wrenhythe' };
const token: MachineToken = {
  id: 'token-1',
  siteId: site.id,
  siteName: site.name,
  purpose: 'census',
  name: 'Bed board',
  createdBy: 'Ada',
  createdAt: 1_790_000_000,
  lastUsedAt: null,
  revokedAt: null,
};

/** A server that keeps its tokens; every request is noted. */
function serve(path: string) {
  const tokens: MachineToken[] = [];
  const requests: { method: string; path: string; body: unknown }[] = [];
  vi.stubGlobal('fetch', (address: string, init: RequestInit) => {
    const body: unknown = typeof init.body === 'string' ? JSON.parse(init.body) : undefined;
    requests.push({ method: init.method ?? '', path: address, body });
    const answer = (status: number, reply: object) => Promise.resolve(new Response(JSON.stringify(reply), { status }));
    if (init.method === 'GET') return answer(200, { tokens, sites: [site] });
    if (address.endsWith('/revocation')) {
      tokens[0] = { ...tokens[0], revokedAt: 1_790_000_600 };
      return answer(200, tokens[0]);
    }
    tokens.unshift({ ...token, ...(body as object) });
    return answer(201, { token: tokens[0], secret });
  });
  const session = { sites: [{ ...site, timeZone: 'Europe/London' }] } as unknown as SignedInSession;
  render(
    <QueryClientProvider client={new QueryClient({ defaultOptions: { queries: { retry: false } } })}>
      <SessionProvider value={session}>
        <MemoryRouter initialEntries={[path]}>
          <Routes>
            <Route path="/tokens" element={<TokensPage />} />
            <Route path="/sites/:siteId/tokens" element={<TokensPage />} />
          </Routes>
        </MemoryRouter>
      </SessionProvider>
    </QueryClientProvider>,
  );
  return { requests, user: userEvent.setup() };
}
// The simulated page knows the element, but not how it opens.
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

test('a token is made, its secret shown once with a button that copies it, then gone', async () => {
  const { requests, user } = serve('/tokens');
  await user.click(await screen.findByRole('button', { name: 'Make the token' }));
  expect(screen.getAllByRole('alert').map(({ textContent }) => textContent)).toEqual([
    'Choose the site.',
    'Name the system that will use it, in 3 characters or more.',
  ]);
  expect(requests.filter(({ method }) => method === 'POST')).toEqual([]);

  await user.selectOptions(screen.getByLabelText('Site'), 'Wrenhythe');
  await user.selectOptions(screen.getByLabelText('What it lets a system do'), 'Upload visit logs');
  await user.type(screen.getByLabelText('Which system uses it'), '  Nightly extract ');
  await user.click(screen.getByRole('button', { name: 'Make the token' }));
  const field = await screen.findByLabelText('Secret');
  expect(field).toHaveValue(secret);
  expect(field).toHaveFocus();
  expect(requests.find(({ method }) => method === 'POST')).toEqual({
    method: 'POST',
    path: '/api/tokens',
    body: { siteId: 'site-1', purpose: 'visit-log', name: 'Nightly extract' },
  });
  await user.click(screen.getByRole('button', { name: 'Copy the secret' }));
  expect(await screen.findByText('Copied.')).toBeVisible();
  expect(await navigator.clipboard.readText()).toBe(secret);
  await user.click(screen.getByRole('button', { name: 'I have kept it' }));
  expect(document.body.innerHTML).not.toContain(secret);
  expect(await screen.findByRole('heading', { level: 1, name: '1 machine token in use' })).toBeVisible();
  expect(screen.getByLabelText('Which system uses it')).toHaveValue('');
});

test('a name that could identify somebody is not sent', async () => {
  const { requests, user } = serve('/tokens');
  await user.selectOptions(await screen.findByLabelText('Site'), 'Wrenhythe');
  await user.type(screen.getByLabelText('Which system uses it'), 'jo@hospital.example');
  await user.click(screen.getByRole('button', { name: 'Make the token' }));
  expect(screen.getByRole('alert')).toHaveTextContent('This looks like an e-mail address.');
  expect(requests.filter(({ method }) => method === 'POST')).toEqual([]);
});

test('the steward makes one for upload by its name alone, and revokes it after a question', async () => {
  const { requests, user } = serve('/sites/site-1/tokens');
  await user.type(await screen.findByLabelText('Which system uses it'), 'Nightly extract');
  expect(screen.queryByLabelText('Site')).toBeNull();
  await user.click(screen.getByRole('button', { name: 'Make the token' }));
  await screen.findByLabelText('Secret');
  await user.click(await screen.findByRole('button', { name: 'Revoke “Nightly extract”' }));
  const dialog = within(screen.getByRole('dialog'));
  await user.click(dialog.getByRole('button', { name: 'Revoke the token' }));
  await waitFor(() => expect(screen.queryByRole('dialog')).toBeNull());
  expect(await screen.findByText('Revoked 21 Sep 2026')).toBeVisible();
  expect(requests.filter(({ method }) => method === 'POST').map(({ path, body }) => [path, body])).toEqual([
    ['/api/sites/site-1/tokens', { name: 'Nightly extract' }],
    ['/api/sites/site-1/tokens/token-1/revocation', undefined],
  ]);
});
