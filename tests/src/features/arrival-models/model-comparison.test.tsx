import { QueryClient, QueryClientProvider } from '@tanstack/react-query';
import { render, screen, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import type { ComparedScale, ModelComparisonReply } from '../../../../shared/api/arrival-models.ts';
import { ComparisonVerdict } from '../../../../src/features/arrival-models/ComparisonVerdict.tsx';
import { ModelComparison } from '../../../../src/features/arrival-models/ModelComparison.tsx';

const fetched = vi.fn<typeof fetch>();
beforeEach(() => vi.stubGlobal('fetch', fetched));
afterEach(() => {
  vi.unstubAllGlobals();
  fetched.mockReset();
});

const side = (logScore: number, observed: number) => ({
  logScore,
  mase: 0.71,
  pinball: 0.82,
  coverage: [0.5, 0.8, 0.9, 0.95].map((level) => ({ level, observed, expected: level + 0.02, se: 0.01 })),
});
const scale = (value: number, se: number | null): ComparedScale => ({
  n: 2184,
  candidate: side(2.3 + value, 0.914),
  inUse: side(2.3, 0.852),
  difference: {
    logScore: { value, se, monteCarlo: 0.0004 },
    pinball: { value: value / 10, se, monteCarlo: 0.0001 },
  },
});
const comparison: ModelComparisonReply = {
  id: 'c1',
  inUse: { id: 'm1', fittedAt: 1_790_000_000, fittedBy: 'W. Aldous' },
  stillInUse: true,
  status: 'done',
  createdAt: 1_796_000_000,
  askedBy: 'R. Marsh',
  jobId: 'j1',
  error: null,
  result: {
    from: 1_788_130_800,
    to: 1_795_996_800,
    weeks: 13,
    weeksAlike: 0,
    arrivals: [
      { level: 'hour', ...scale(-0.012, 0.004) },
      { level: 'week', ...scale(0.02, null) },
    ],
    need: [{ leadHours: 12, ...scale(0.03, 0.01) }],
    draws: 1000,
    replications: 300,
    batches: 2,
    words: {
      headline: 'The candidate did better over the last 13 weeks at arrivals by hour, but worse at need 12 h ahead.',
      arrivals: 'Arrivals: sentence.',
      need: 'Need: sentence.',
      ranges: 'Within the 90 % range, sentence.',
      grounds: 'Each was given only what it would have known.',
    },
  },
};

const json = (body: object, status = 200) => Promise.resolve(new Response(JSON.stringify(body), { status }));
function show(body: { comparison: ModelComparisonReply | null; mayCompare: boolean }) {
  fetched.mockImplementation((_, init) =>
    init?.method === 'POST' || init?.method === 'post' ? json({ comparisonId: 'c2', jobId: 'j2' }, 202) : json(body),
  );
  return render(
    <QueryClientProvider client={new QueryClient({ defaultOptions: { queries: { retry: false } } })}>
      <ModelComparison
        siteId="s"
        modelId="m2"
        timeZone="Europe/London"
        progressOf={(jobId) => <p>{`progress of ${jobId}`}</p>}
      />
      <section aria-label="beside approve">
        <ComparisonVerdict siteId="s" modelId="m2" />
      </section>
    </QueryClientProvider>,
  );
}
const beside = () => within(screen.getByRole('region', { name: 'beside approve' }));

describe('a candidate beside the model in use', () => {
  it('is offered where there is none yet, and the approver is told so', async () => {
    show({ comparison: null, mayCompare: true });
    expect(await beside().findByText('Not compared with the model in use yet.')).toBeInTheDocument();
    await userEvent.setup().click(screen.getByRole('button', { name: 'Try both on past weeks' }));
    const sent = fetched.mock.calls.find(([, init]) => init?.method?.toUpperCase() === 'POST');
    expect(sent?.[0]).toBe('/api/sites/s/arrival-models/m2/comparison');
  });

  it('shows how far it is while it runs, and offers no second one', async () => {
    show({ comparison: { ...comparison, status: 'running', result: null }, mayCompare: false });
    expect(await screen.findByText('progress of j1')).toBeInTheDocument();
    expect(screen.queryByRole('button')).toBeNull();
  });

  it('shows both models’ scores with the error of each difference, and the verdict beside the approval', async () => {
    show({ comparison, mayCompare: true });
    expect(await beside().findByText(/did better over the last 13 weeks/)).toBeInTheDocument();
    const rows = within(screen.getByRole('table', { name: 'Arrivals of the site' })).getAllByRole('row');
    const hour = rows[1].textContent.replace(/\u00a0/g, ' ');
    expect(hour).toContain('Candidate better');
    expect(hour).toContain('−0.012 ± 0.004 (0.0004)');
    expect(hour).toContain('91.4 (92.0)');
    expect(hour).toContain('85.2 (92.0)');
    // One week of weeks has no error of its own: nothing is claimed.
    expect(rows[2].textContent).toContain('Too few weeks');
    const need = within(screen.getByRole('table', { name: 'Need of the whole department' })).getAllByRole('row');
    expect(need[1].textContent).toContain('Candidate worse');
  });

  it('says when another model is in use by now, and why one failed', async () => {
    const { unmount } = show({ comparison: { ...comparison, stillInUse: false }, mayCompare: true });
    expect(await screen.findByText('Another model is in use now than the one compared here.')).toBeInTheDocument();
    expect(beside().getByText('Compared with a model that is no longer in use.')).toBeInTheDocument();
    unmount();
    show({ comparison: { ...comparison, status: 'failed', error: 'Cancelled.', result: null }, mayCompare: true });
    expect(await screen.findByText('Cancelled.')).toBeInTheDocument();
    expect(screen.getByRole('button', { name: 'Try both again' })).toBeInTheDocument();
  });
});
