import { QueryClientProvider, useMutation } from '@tanstack/react-query';
import { render, screen, waitFor } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { useState } from 'react';
import { beforeAll, describe, expect, it, vi } from 'vitest';
import { Announcements } from '../../../src/app/Announcements.tsx';
import { makeQueryClient } from '../../../src/app/query-client.ts';
import { announce } from '../../../src/lib/announce.ts';

function Change({ fails }: { fails: boolean }) {
  const change = useMutation({
    meta: { done: 'The area was saved.' },
    mutationFn: () => (fails ? Promise.reject(new Error('refused')) : Promise.resolve(1)),
  });
  return (
    <button type="button" onClick={() => change.mutate()}>
      {change.isError ? 'Refused' : 'Save'}
    </button>
  );
}

function Page({ fails }: { fails: boolean }) {
  const [client] = useState(makeQueryClient);
  return (
    <QueryClientProvider client={client}>
      <Change fails={fails} />
      <Announcements />
    </QueryClientProvider>
  );
}

/** The part comes with the first result; a busy machine takes its time over it. */
const patient = { timeout: 15_000 };

describe('results told in passing', () => {
  beforeAll(async () => {
    await import('../../../src/components/Toasts.tsx');
  });

  it('tells that a change came through, and goes when it is put away', async () => {
    render(<Page fails={false} />);
    await userEvent.click(screen.getByRole('button', { name: 'Save' }));
    expect((await screen.findAllByText('The area was saved.', {}, patient))[0]).toBeVisible();
    await userEvent.click(screen.getByRole('button', { name: 'Put this away' }));
    await waitFor(() => {
      expect(screen.queryByRole('button', { name: 'Put this away' })).toBeNull();
    }, patient);
  });

  it('says nothing of a change that was refused', async () => {
    render(<Page fails />);
    await userEvent.click(screen.getByRole('button', { name: 'Save' }));
    await screen.findByRole('button', { name: 'Refused' }, patient);
    expect(screen.queryByText('The area was saved.')).toBeNull();
  });

  it('puts back what can be put back', async () => {
    const undo = vi.fn();
    render(<Page fails={false} />);
    announce('The day was taken out.', undo);
    await userEvent.click(await screen.findByRole('button', { name: 'Undo' }, patient));
    expect(undo).toHaveBeenCalledOnce();
    await waitFor(() => {
      expect(screen.queryByRole('button', { name: 'Undo' })).toBeNull();
    }, patient);
  });
});
