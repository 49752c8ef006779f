import { QueryClient, QueryClientProvider } from '@tanstack/react-query';
import { render, screen } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { afterEach, expect, test, vi } from 'vitest';
import { DeclareGapForm } from '../../../../src/features/visit-logs/DeclareGapForm.tsx';

afterEach(() => {
  vi.unstubAllGlobals();
});

function show() {
  const onDone = vi.fn();
  const sent: unknown[] = [];
  vi.stubGlobal('fetch', (_: string, { body }: { body: string }) => {
    sent.push(JSON.parse(body));
    const reply = { id: 'g1', ...(sent[0] as object), declaredBy: 'Sam', declaredAt: 1 };
    return Promise.resolve(new Response(JSON.stringify(reply), { status: 201 }));
  });
  render(
    <QueryClientProvider client={new QueryClient()}>
      <DeclareGapForm siteId="s1" areas={[{ id: 'a1', name: 'Acute' }]} timeZone="Europe/London" onDone={onDone} />
    </QueryClientProvider>,
  );
  return { onDone, sent, user: userEvent.setup(), declare: screen.getByRole('button', { name: 'Declare it' }) };
}

test('every fault is told at once, and nothing is sent', async () => {
  const { user, sent, declare } = show();
  await user.type(screen.getByLabelText('Reason'), 'Mrs Fairweather called');
  await user.click(declare);
  expect(screen.getAllByRole('alert').map((alert) => alert.textContent)).toEqual([
    'Choose one.',
    'Enter a date and a time.',
    'Enter a date and a time.',
    'This looks as if it held a name. Leave out anything that could identify a person.',
  ]);
  expect(sent).toEqual([]);
});

test('the hours are the site’s own, and the end must lie after the start', async () => {
  const { user, sent, onDone, declare } = show();
  await user.click(screen.getByLabelText(/^Diversion/));
  await user.selectOptions(screen.getByLabelText('Where'), 'Acute');
  await user.type(screen.getByLabelText('From'), '2026-07-01T08:00');
  await user.type(screen.getByLabelText('Until'), '2026-07-01T07:00');
  await user.type(screen.getByLabelText('Reason'), 'Bridge closed');
  await user.click(declare);
  expect(screen.getByRole('alert').textContent).toBe('The end must lie after the start.');
  await user.clear(screen.getByLabelText('Until'));
  await user.type(screen.getByLabelText('Until'), '2026-07-01T12:30');
  await user.click(declare);
  await vi.waitFor(() => {
    expect(onDone).toHaveBeenCalled();
  });
  // An hour ahead of UTC in July.
  const utc = (text: string) => Date.parse(text) / 1000;
  expect(sent).toEqual([
    {
      kind: 'diversion',
      areaId: 'a1',
      from: utc('2026-07-01T07:00:00Z'),
      until: utc('2026-07-01T11:30:00Z'),
      reason: 'Bridge closed',
    },
  ]);
});
