import { QueryClient, QueryClientProvider } from '@tanstack/react-query';
import { render, screen } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import type { ModelSummary } from '../../../../shared/api/arrival-models.ts';
import { JudgeModel } from '../../../../src/features/arrival-models/JudgeModel.tsx';
import { modelHeadline } from '../../../../src/features/arrival-models/model-words.ts';

const fetched = vi.fn<typeof fetch>();
beforeEach(() => vi.stubGlobal('fetch', fetched));
afterEach(() => {
  vi.unstubAllGlobals();
  fetched.mockReset();
});

const candidate: ModelSummary = {
  id: 'm2',
  status: 'candidate',
  fittedAt: 1_796_000_000,
  fittedBy: 'S. Lind',
  approvedAt: null,
  approvedBy: null,
  retiredAt: null,
  reason: null,
  trainedFrom: 1_750_000_000,
  trainedTo: 1_796_000_000,
  visits: 142_381,
  weeksOfHistory: 78,
  sinceFit: { withdrawnLogs: [], gapsDeclared: 0 },
  refreshedAt: null,
  error: null,
  jobId: null,
  fittedByCaller: false,
};
const show = (model: ModelSummary) =>
  render(
    <QueryClientProvider client={new QueryClient()}>
      <JudgeModel siteId="general" model={model} />
    </QueryClientProvider>,
  );

describe('JudgeModel', () => {
  it('does not offer approval to the person who fitted it, and says why', () => {
    show({ ...candidate, fittedByCaller: true });
    expect(screen.queryByRole('button', { name: /Approve/ })).toBeNull();
    expect(screen.getByText('You fitted this model, so somebody else has to approve it.')).toBeInTheDocument();
    expect(screen.getByRole('button', { name: 'Retire' })).toBeInTheDocument();
  });

  it('asks for a reason before anything is sent, and refuses one that names a person', async () => {
    show(candidate);
    const user = userEvent.setup();
    await user.click(screen.getByRole('button', { name: 'Approve and put into use' }));
    expect(await screen.findByText('Say why')).toBeInTheDocument();
    await user.type(screen.getByRole('textbox'), 'Looked at with Dr Jones');
    await user.click(screen.getByRole('button', { name: 'Approve and put into use' }));
    expect(await screen.findByText(/Leave out anything that could identify a person/)).toBeInTheDocument();
    expect(fetched).not.toHaveBeenCalled();
  });

  it('approves with the reason, and keeps it in the field when the server refuses', async () => {
    fetched.mockResolvedValue(
      new Response(
        JSON.stringify({
          type: 'about:blank',
          title: 'Not approved',
          status: 409,
          detail: 'It was retired meanwhile.',
        }),
        {
          status: 409,
        },
      ),
    );
    show(candidate);
    const user = userEvent.setup();
    await user.type(screen.getByRole('textbox'), 'Fits the last four weeks');
    await user.click(screen.getByRole('button', { name: 'Approve and put into use' }));
    expect(await screen.findByText('Not approved')).toBeInTheDocument();
    expect(fetched.mock.calls[0][0]).toBe('/api/sites/general/arrival-models/m2/approval');
    expect(JSON.parse(fetched.mock.calls[0][1]?.body as string)).toEqual({ reason: 'Fits the last four weeks' });
    expect(screen.getByRole<HTMLTextAreaElement>('textbox').value).toBe('Fits the last four weeks');
  });
});

describe('modelHeadline', () => {
  it('says what the model is and how old', () => {
    const now = 1_796_000_000 + 11 * 86_400;
    expect(modelHeadline(candidate, now)).toBe('A candidate, fitted 11 days ago. It waits for approval.');
    expect(modelHeadline({ ...candidate, status: 'in use' }, now)).toBe('The model in use, fitted 11 days ago.');
    expect(modelHeadline({ ...candidate, status: 'failed', fittedAt: null }, now)).toBe('This fit failed.');
  });
});
