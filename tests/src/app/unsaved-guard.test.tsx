import { render, screen } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { useState } from 'react';
import { createMemoryRouter, Link, Outlet, RouterProvider, useNavigate } from 'react-router-dom';
import { beforeEach, describe, expect, it, vi } from 'vitest';
import { UnsavedGuard } from '../../../src/app/UnsavedGuard.tsx';
import { useUnsavedWork } from '../../../src/lib/unsaved-work.ts';

function Upload() {
  const [begun, setBegun] = useState(false);
  const navigate = useNavigate();
  useUnsavedWork(begun, 'a file that is not loaded yet');
  return (
    <>
      <button onClick={() => setBegun(true)}>Begin</button>
      <button onClick={() => void navigate('/logs', { state: { saved: true } })}>Accept</button>
      <Link to="/logs">All logs</Link>
    </>
  );
}

function show() {
  const frame = (
    <>
      <Outlet />
      <UnsavedGuard />
    </>
  );
  const router = createMemoryRouter(
    [
      {
        element: frame,
        children: [
          { path: '/new', element: <Upload /> },
          { path: '/logs', element: <h1>Logs</h1> },
        ],
      },
    ],
    { initialEntries: ['/new'] },
  );
  render(<RouterProvider router={router} />);
}
const press = (name: string) => userEvent.click(screen.getByText(name));

beforeEach(() => {
  // jsdom draws no modal dialogs.
  HTMLDialogElement.prototype.showModal = vi.fn(function (this: HTMLDialogElement) {
    this.open = true;
  });
  HTMLDialogElement.prototype.close = vi.fn(function (this: HTMLDialogElement) {
    this.open = false;
  });
});

describe('UnsavedGuard', () => {
  it('lets a page without unsaved work go', async () => {
    show();
    await press('All logs');
    expect(await screen.findByRole('heading', { name: 'Logs' })).toBeInTheDocument();
  });

  it('asks before unsaved work is left, and stays or leaves as told', async () => {
    show();
    await press('Begin');
    await press('All logs');
    expect(await screen.findByText(/You have a file that is not loaded yet/)).toBeInTheDocument();
    await press('Stay on this page');
    expect(screen.queryByRole('heading', { name: 'Logs' })).toBeNull();
    await press('All logs');
    await press('Leave without saving');
    expect(await screen.findByRole('heading', { name: 'Logs' })).toBeInTheDocument();
  });

  it('does not ask once the work was saved', async () => {
    show();
    await press('Begin');
    await press('Accept');
    expect(await screen.findByRole('heading', { name: 'Logs' })).toBeInTheDocument();
  });

  it('has the browser ask before the tab is closed', async () => {
    show();
    await press('Begin');
    const closing = new Event('beforeunload', { cancelable: true });
    window.dispatchEvent(closing);
    expect(closing.defaultPrevented).toBe(true);
  });
});
