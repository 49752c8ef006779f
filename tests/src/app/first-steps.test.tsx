import { render, screen } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { MemoryRouter } from 'react-router-dom';
import { afterEach, describe, expect, it } from 'vitest';
import { FirstSteps } from '../../../src/app/FirstSteps.tsx';
import { roles } from '../../../shared/domain/permission.ts';

afterEach(() => localStorage.clear());

function show(personId: string, held: Parameters<typeof FirstSteps>[0]['roles']) {
  return render(
    <MemoryRouter>
      <FirstSteps personId={personId} roles={held} siteId="saltby-bay" />
    </MemoryRouter>,
  );
}

describe('FirstSteps', () => {
  it.each(roles)('leads the %s somewhere, by at least one link', async (role) => {
    show('one', [role]);
    await userEvent.click(screen.getByText('First time here?'));
    expect(screen.getAllByRole('listitem')).toHaveLength(3);
    for (const link of screen.getAllByRole('link')) expect(link.getAttribute('href')).toMatch(/^\/[a-z]/);
  });

  it('stays away for whoever put it away, and for nobody else', async () => {
    const { unmount } = show('one', ['charge']);
    await userEvent.click(screen.getByText('First time here?'));
    await userEvent.click(screen.getByRole('button', { name: 'Do not show this again' }));
    expect(screen.queryByText('First time here?')).toBeNull();
    unmount();
    expect(show('one', ['charge']).container).toBeEmptyDOMElement();
    show('another', ['charge']);
    expect(screen.getByText('First time here?')).toBeVisible();
  });

  it('says nothing to somebody without a role', () => {
    expect(show('one', []).container).toBeEmptyDOMElement();
  });
});
