import { QueryClient, QueryClientProvider } from '@tanstack/react-query';
import { act, cleanup, render } from '@testing-library/react';
import { afterEach, beforeEach, expect, test, vi } from 'vitest';
import type { Session } from '../../../shared/api/session.ts';
import { IdleLock } from '../../../src/app/IdleLock.tsx';
import { sessionKey } from '../../../src/features/sign-in/session.ts';

const idleSeconds = 900;
let client: QueryClient;
let asked: { method: string; path: string }[];

beforeEach(() => {
  vi.useFakeTimers();
  window.dispatchEvent(new KeyboardEvent('keydown', { key: 'a' }));
  asked = [];
  vi.stubGlobal('fetch', (path: string, init: RequestInit) => {
    asked.push({ method: init.method ?? '', path });
    return Promise.resolve(new Response(null, { status: 204 }));
  });
  client = new QueryClient({ defaultOptions: { queries: { retry: false, gcTime: Infinity } } });
  client.setQueryData(sessionKey, { person: { id: 'p', name: 'Noor', email: '' }, sites: [{}], locked: false });
  render(
    <QueryClientProvider client={client}>
      <IdleLock idleSeconds={idleSeconds} />
    </QueryClientProvider>,
  );
});
afterEach(() => {
  cleanup();
  vi.useRealTimers();
  vi.unstubAllGlobals();
  localStorage.clear();
});

const session = () => client.getQueryData<Session>(sessionKey);
const wait = (seconds: number) => act(() => vi.advanceTimersByTimeAsync(seconds * 1000));

test('a screen that nobody touched for the idle time is locked, here and at the server', async () => {
  await wait(idleSeconds - 10);
  expect(session()).toMatchObject({ locked: false });
  expect(asked.filter(({ method }) => method === 'POST')).toEqual([]);
  await wait(30);
  expect(session()).toMatchObject({ person: null, sites: [], locked: true });
  expect(asked).toContainEqual({ method: 'POST', path: '/auth/lock' });
});

test.each([
  ['a key', new KeyboardEvent('keydown', { key: 'Tab' })],
  ['a pointer', new Event('pointerdown')],
  ['a wheel', new Event('wheel')],
])('%s begins the time anew', async (_, event) => {
  await wait(idleSeconds - 60);
  window.dispatchEvent(event);
  await wait(idleSeconds - 60);
  expect(session()).toMatchObject({ locked: false });
  await wait(120);
  expect(session()).toMatchObject({ locked: true });
});

test('use in another tab of this device counts too', async () => {
  await wait(idleSeconds - 60);
  localStorage.setItem('last-use', String(Date.now()));
  await wait(120);
  expect(session()).toMatchObject({ locked: false });
});

test('once taken down it locks nothing', async () => {
  cleanup();
  await wait(idleSeconds * 2);
  expect(session()).toMatchObject({ locked: false });
});
