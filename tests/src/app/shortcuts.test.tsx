import { render, screen } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { useState } from 'react';
import { MemoryRouter, useLocation } from 'react-router-dom';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { Shortcuts } from '../../../src/app/Shortcuts.tsx';

const places = [{ key: 't', name: 'Tonight', to: '/sites/general/tonight' }];

function Page() {
  const [open, setOpen] = useState(false);
  return (
    <>
      <output>{useLocation().pathname}</output>
      <input aria-label="Acute, present" />
      <Shortcuts places={places} open={open} onOpen={() => setOpen(true)} onClose={() => setOpen(false)} />
    </>
  );
}
const show = () =>
  render(
    <MemoryRouter initialEntries={['/how']}>
      <Page />
    </MemoryRouter>,
  );

beforeEach(() => {
  // jsdom draws no modal dialogs.
  HTMLDialogElement.prototype.showModal = vi.fn(function (this: HTMLDialogElement) {
    this.open = true;
  });
  HTMLDialogElement.prototype.close = vi.fn(function (this: HTMLDialogElement) {
    this.open = false;
  });
});
afterEach(() => localStorage.clear());

describe('Shortcuts', () => {
  it('goes to a place by "g" and its letter', async () => {
    show();
    await userEvent.keyboard('gt');
    expect(screen.getByRole('status').textContent).toBe('/sites/general/tonight');
  });

  it('lists the keys on "?"', async () => {
    show();
    await userEvent.keyboard('?');
    expect(screen.getByRole('dialog', { name: 'Keyboard shortcuts' })).toBeInTheDocument();
  });

  it('leaves what is typed into a field alone', async () => {
    show();
    await userEvent.type(screen.getByLabelText('Acute, present'), 'gt?');
    expect(screen.getByRole('status').textContent).toBe('/how');
    expect(screen.queryByRole('dialog')).toBeNull();
  });

  // WCAG 2.2, success criterion 2.1.4: keys without a modifier can be turned off.
  it('can be switched off, and remembers it', async () => {
    const { unmount } = show();
    await userEvent.keyboard('?');
    await userEvent.click(screen.getByRole('checkbox'));
    await userEvent.click(screen.getByRole('button', { name: 'Close' }));
    await userEvent.keyboard('gt');
    expect(screen.getByRole('status').textContent).toBe('/how');
    unmount();
    show();
    await userEvent.keyboard('?');
    expect(screen.queryByRole('dialog')).toBeNull();
  });
});
