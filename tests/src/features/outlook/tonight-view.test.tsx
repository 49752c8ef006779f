import { QueryClient, QueryClientProvider } from '@tanstack/react-query';
import { render, screen, waitFor, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { MemoryRouter } from 'react-router-dom';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { censusBody } from '../../../../shared/api/censuses.ts';
import type { Census } from '../../../../shared/api/censuses.ts';
import type { Tonight } from '../../../../shared/api/outlooks.ts';
import { TonightView } from '../../../../src/features/outlook/TonightView.tsx';
import { buildAreaOutlook, buildCensus, buildSite, buildTonight, now } from './build-tonight.ts';

const fetched = vi.fn<typeof fetch>();
beforeEach(() => {
  sessionStorage.clear();
  vi.stubGlobal('fetch', fetched);
  // jsdom lays nothing out and scrolls nothing.
  Element.prototype.scrollTo = () => undefined;
});
afterEach(() => {
  vi.unstubAllGlobals();
  fetched.mockReset();
});

const site = buildSite();
const queryClient = () =>
  new QueryClient({
    defaultOptions: { queries: { retry: false }, mutations: { retry: false, networkMode: 'always' } },
  });

function view(
  tonight: Tonight = buildTonight(),
  census: Census = buildCensus(),
  rights = { enterCensus: true, changeBeds: true, acknowledge: true },
) {
  return (
    <MemoryRouter>
      <TonightView
        tonight={tonight}
        loadedAt={Date.now()}
        site={site}
        census={census}
        rights={rights}
        stale={null}
        emptyActions={null}
        howHref="/how"
        nightLog={null}
      />
    </MemoryRouter>
  );
}
function show(...parts: Parameters<typeof view>) {
  const client = queryClient();
  const wrap = (...again: Parameters<typeof view>) => (
    <QueryClientProvider client={client}>{view(...again)}</QueryClientProvider>
  );
  const shown = render(wrap(...parts));
  return { ...shown, again: (...next: Parameters<typeof view>) => shown.rerender(wrap(...next)) };
}

// By label: a query by role walks the whole board for each call.
const field = (name: string) => screen.getByLabelText<HTMLInputElement>(name);
function table(caption: string): HTMLTableElement {
  const found = screen.getByText(caption, { selector: 'caption' }).closest('table');
  if (!found) throw new Error(`${caption} is no table`);
  return found;
}
const saveButtons = () => screen.queryAllByText('Save census', { selector: 'button' });
async function type(name: string, figure: string) {
  const user = userEvent.setup();
  const input = field(name);
  await user.clear(input);
  await user.type(input, figure);
  return user;
}

describe('the census on Tonight', () => {
  it('is saved with Enter: only the area that was edited, taken now', async () => {
    fetched.mockResolvedValue(
      new Response(JSON.stringify({ censusId: 'c1', outlookId: 'o2', reason: null }), { status: 201 }),
    );
    show();
    const user = await type('Acute, waiting', '5');
    expect(screen.getByText(/Waiting was 3/)).toBeInTheDocument();
    await user.keyboard('{Enter}');
    await screen.findByText(/Census saved at 19:0/);
    const [address, request] = fetched.mock.calls[0];
    expect(address).toBe('/api/sites/general/censuses');
    const sent = censusBody.parse(JSON.parse(request?.body as string));
    expect(sent.areas).toEqual([{ areaId: 'acute', present: 22, waiting: 5, boarding: 6 }]);
    expect(sent.takenAt - now).toBeGreaterThanOrEqual(0);
    expect(sent.takenAt - now).toBeLessThan(60);
  });

  it('keeps the typed figures when the server is not reached, and says so', async () => {
    fetched.mockRejectedValue(new TypeError('Failed to fetch'));
    show();
    const user = await type('Acute, waiting', '5');
    await user.click(saveButtons()[0]);
    await screen.findByText('The server cannot be reached');
    expect(screen.getByText('Your figures are still in the fields.')).toBeInTheDocument();
    expect(field('Acute, waiting').value).toBe('5');
    expect(saveButtons().length).toBeGreaterThan(0);
  });

  it('keeps the typed figures when a newer census comes in, and refreshes the fields nobody edited', async () => {
    const { again } = show();
    await type('Acute, waiting', '5');
    again(buildTonight(), buildCensus(4));
    await waitFor(() => expect(field('Observation, waiting').value).toBe('4'));
    expect(field('Acute, waiting').value).toBe('5');
    expect(screen.getByText(/Waiting was 4/)).toBeInTheDocument();
  });

  it('sends nothing that the server would refuse, and says why beside the row', async () => {
    show();
    const user = await type('Acute, waiting', '17');
    await user.keyboard('{Enter}');
    expect(await screen.findByText(/Waiting and boarding together cannot exceed present/)).toBeInTheDocument();
    expect(fetched).not.toHaveBeenCalled();
  });

  it('counts everything again in one press', async () => {
    fetched.mockResolvedValue(
      new Response(JSON.stringify({ censusId: 'c1', outlookId: null, reason: 'No model is in use.' }), { status: 201 }),
    );
    show();
    await userEvent.click(screen.getAllByText('Nothing changed', { selector: 'button' })[0]);
    await screen.findByText(/No model is in use/);
    const sent = censusBody.parse(JSON.parse(fetched.mock.calls[0][1]?.body as string));
    expect(sent.areas.map((area) => area.areaId)).toEqual(['acute', 'obs']);
  });

  it('puts figures typed before the session was lost back into their fields', async () => {
    const first = show();
    await type('Acute, waiting', '7');
    first.unmount();
    show();
    await waitFor(() => expect(field('Acute, waiting').value).toBe('7'));
    expect(saveButtons().length).toBeGreaterThan(0);
  });

  it('shows figures instead of fields to those who only read', () => {
    show(buildTonight(), buildCensus(), { enterCensus: false, changeBeds: false, acknowledge: false });
    expect(document.querySelectorAll('input')).toHaveLength(0);
    expect(screen.getByText('Acute, present:').parentElement?.textContent).toContain('22');
  });
});

describe('staffed beds tonight', () => {
  it('asks until when and why, and refuses what identifies a patient or lies below the safe minimum', async () => {
    show();
    const user = await type('Acute, staffed beds now', '11');
    const why = field('Reason');
    await user.type(why, 'Nurse called in sick');
    await user.click(screen.getByText('Change beds', { selector: 'button' }));
    expect(await screen.findByText('Not below the safe minimum of 12')).toBeInTheDocument();
    await type('Acute, staffed beds now: Not below the safe minimum of 12', '20');
    await user.clear(why);
    await user.type(why, 'Bed for Mr Smith');
    await user.click(screen.getByText('Change beds', { selector: 'button' }));
    expect(await screen.findByText(/Leave out anything that could identify a patient/)).toBeInTheDocument();
    expect(fetched).not.toHaveBeenCalled();
  });
});

describe('the board', () => {
  it('opens the worst area past its limit and says every cell in full', () => {
    show();
    expect(document.querySelector('h1')?.textContent).toBe('Acute is likely to run short from 21:00.');
    expect(screen.getByText('Acute', { selector: 'h3 button' }).getAttribute('aria-expanded')).toBe('true');
    expect(screen.getByText('Observation', { selector: 'h3 button' }).getAttribute('aria-expanded')).toBe('false');
    const strip = table('Acute, hour by hour');
    expect(within(strip).getByText('64 %, Likely, 21:00, past the limit')).toBeInTheDocument();
    expect(within(strip).getByText('10 %, Unlikely, 20:00')).toBeInTheDocument();
    expect(screen.getByText('Call the site manager.')).toBeInTheDocument();
  });

  it('prints the chance within the hour for an area of eight spaces or fewer', () => {
    show();
    const strip = table('Observation, hour by hour');
    expect(within(strip).getByText('4 %, Remote, 20:00')).toBeInTheDocument();
    expect(within(strip).getByText('Chance, in the hour')).toBeInTheDocument();
  });

  it('gives an area without a census an outline and no word', () => {
    const census = { ...buildCensus(), areas: buildCensus().areas.slice(0, 1) };
    show(
      buildTonight({}, [buildAreaOutlook('acute', [0.1]), buildAreaOutlook('obs', [0.4], { counted: false })]),
      census,
    );
    const strip = table('Observation, hour by hour');
    expect(within(strip).getByText('80 %, not counted, 20:00')).toBeInTheDocument();
    expect(within(strip).queryByText(/Very likely/)).toBeNull();
    // The area, and the row of those whose area is not decided.
    expect(screen.getAllByText('Not counted', { selector: 'h3 ~ p' })).toHaveLength(2);
  });

  it('says what to do where there is no outlook, and still takes a census', () => {
    show(
      buildTonight({
        outlook: null,
        missing: { reason: 'no model', next: 'Fit one on an accepted log and have it approved.' },
      }),
    );
    expect(document.querySelector('h1')?.textContent).toBe('There is no outlook: no arrival model is in use.');
    expect(screen.getByText('Fit one on an accepted log and have it approved.')).toBeInTheDocument();
    expect(field('Acute, present').value).toBe('22');
  });

  it('says that a census was kept where there is no outlook, and why none follows', async () => {
    fetched.mockResolvedValue(
      new Response(JSON.stringify({ censusId: 'c1', outlookId: null, reason: 'No plan is saved yet.' }), {
        status: 201,
      }),
    );
    show(buildTonight({ outlook: null, missing: { reason: 'no staffed-bed plan', next: 'Have the plan saved.' } }));
    const user = await type('Acute, present', '23');
    await user.keyboard('{Enter}');
    const said = await screen.findByText(/^Census saved at/);
    expect(said.closest('[role=status]')).toHaveTextContent('No plan is saved yet.');
  });

  it('says at the foot, within reach of the thumb, that a save failed and that nothing typed is lost', async () => {
    fetched.mockRejectedValue(new TypeError('Failed to fetch'));
    show();
    const user = await type('Acute, present', '23');
    await user.keyboard('{Enter}');
    expect(
      await screen.findByText('Not saved: the server cannot be reached. Your figures are still in the fields.'),
    ).toBeInTheDocument();
    expect(field('Acute, present').value).toBe('23');
  });
});
