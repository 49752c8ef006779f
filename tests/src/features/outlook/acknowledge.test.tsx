import { QueryClient, QueryClientProvider } from '@tanstack/react-query';
import { render, screen, waitFor } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { MemoryRouter } from 'react-router-dom';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import type { Acknowledgement } from '../../../../shared/api/acknowledgements.ts';
import type { Tonight } from '../../../../shared/api/outlooks.ts';
import { checkNote } from '../../../../src/features/outlook/AcknowledgeForm.tsx';
import { TonightView } from '../../../../src/features/outlook/TonightView.tsx';
import { buildAreaOutlook, buildCensus, buildSite, buildTonight, hours, now } from './build-tonight.ts';

/* What asks, folds and asks again is the product's own rule (no source outside it). */
const fetched = vi.fn<typeof fetch>();
beforeEach(() => {
  sessionStorage.clear();
  vi.stubGlobal('fetch', fetched);
  Element.prototype.scrollTo = () => undefined;
});
afterEach(() => {
  vi.unstubAllGlobals();
  fetched.mockReset();
});

const made = (ofHours: number[], change: Partial<Acknowledgement> = {}): Acknowledgement => ({
  id: 'a1',
  areaId: 'acute',
  outlookId: 'outlook-1',
  fromAt: ofHours[0],
  untilAt: ofHours[ofHours.length - 1],
  hours: ofHours,
  note: 'Site manager called',
  by: 'A. Brandt',
  at: now + 240,
  ...change,
});

function show(tonight: Tonight, acknowledge = true) {
  return render(
    <MemoryRouter>
      <QueryClientProvider client={new QueryClient({ defaultOptions: { mutations: { networkMode: 'always' } } })}>
        <TonightView
          tonight={tonight}
          loadedAt={Date.now()}
          site={buildSite()}
          census={buildCensus()}
          rights={{ enterCensus: false, changeBeds: false, acknowledge }}
          stale={null}
          emptyActions={null}
          howHref="/how"
          nightLog={null}
        />
      </QueryClientProvider>
    </MemoryRouter>,
  );
}
const note = () => screen.getByLabelText<HTMLInputElement>('What was done, no patient details');

describe('the panel past the limit', () => {
  it('sends what was done with Enter, for the area and the outlook on the page', async () => {
    fetched.mockResolvedValue(new Response(JSON.stringify(made(hours.slice(1, 4))), { status: 201 }));
    show(buildTonight());
    expect(screen.getByText('Call the site manager.')).toBeInTheDocument();
    await userEvent.type(note(), 'Site manager called{Enter}');
    await waitFor(() => expect(note().value).toBe(''));
    const [address, request] = fetched.mock.calls[0];
    expect(address).toBe('/api/sites/general/acknowledgements');
    expect(JSON.parse(request?.body as string)).toEqual({
      areaId: 'acute',
      outlookId: 'outlook-1',
      note: 'Site manager called',
    });
  });

  it('refuses what could identify a patient before anything is sent, and an empty note', async () => {
    show(buildTonight());
    await userEvent.type(note(), 'Moved Mr Smith{Enter}');
    expect(await screen.findByText(/This looks like a name/)).toBeInTheDocument();
    expect(await checkNote(' ')).toBe('Say what was done, without patient details');
    expect(await checkNote('Two bays open from 20:30')).toBeNull();
    expect(fetched).not.toHaveBeenCalled();
  });

  it('keeps the note when the server is not reached, and says so', async () => {
    fetched.mockRejectedValue(new TypeError('Failed to fetch'));
    show(buildTonight());
    await userEvent.type(note(), 'Site manager called{Enter}');
    expect(await screen.findByText('Your note is still in its field.')).toBeInTheDocument();
    expect(note().value).toBe('Site manager called');
  });

  it('acknowledged, it folds to who, when and what; more can be added', async () => {
    show(buildTonight({ acknowledgements: [made(hours.slice(1, 4))] }));
    expect(screen.getByText('Acknowledged 19:06 by A. Brandt.')).toBeInTheDocument();
    expect(screen.getByText('Site manager called.')).toBeInTheDocument();
    expect(screen.queryByText('Call the site manager.')).toBeNull();
    await userEvent.click(screen.getByText('Add to this note', { selector: 'button' }));
    expect(note()).toBeInTheDocument();
    expect(screen.getByText('Call the site manager.')).toBeInTheDocument();
  });

  it('asks again where an hour passes the limit that nobody acknowledged, and names it', () => {
    show(buildTonight({ acknowledgements: [made(hours.slice(1, 3))] }));
    // 23:00 at 30 %, limit 25 %.
    expect(screen.getByText('Not acknowledged yet: 23:00.')).toBeInTheDocument();
    expect(screen.getByText('Acknowledged 19:06 by A. Brandt.')).toBeInTheDocument();
    expect(note()).toBeInTheDocument();
  });

  it('asks the shift that comes in again, and keeps what the one before said', () => {
    // Late runs 14:00 to 21:30, Night from 21:00: the overlap is the incoming shift's.
    const acknowledgements = [made(hours.slice(1, 4))];
    const at = (time: number) => buildTonight({ acknowledgements, now: time });
    const nightStarts = Date.UTC(2026, 11, 1, 21) / 1000;
    const { unmount } = show(at(nightStarts - 60));
    expect(screen.queryByLabelText('What was done, no patient details')).toBeNull();
    unmount();
    show(at(nightStarts));
    expect(screen.getByText('Acknowledged 19:06 by A. Brandt.')).toBeInTheDocument();
    expect(
      screen.getByText(/^Acknowledged by the shift before; not by this one yet: 22:00, 23:00\.$/),
    ).toBeInTheDocument();
    expect(note()).toBeInTheDocument();
  });

  it('takes no acknowledgement of another area for its own, and offers none to those who only read', () => {
    show(buildTonight({ acknowledgements: [made(hours.slice(1, 4), { areaId: 'obs' })] }), false);
    expect(screen.queryByText(/Acknowledged/)).toBeNull();
    expect(screen.getByText('Call the site manager.')).toBeInTheDocument();
    expect(screen.queryByLabelText('What was done, no patient details')).toBeNull();
  });

  it('of an area of eight spaces or fewer asks about the hours whose printed cell carries the bar', () => {
    const small = buildAreaOutlook('obs', [0.1, 0.2, 0.14, 0.01]);
    // Printed is the chance within the hour, twice that at the full hour: 20 %, 40 %, 28 %, 2 %.
    show(buildTonight({}, [buildAreaOutlook('acute', []), small]));
    expect(document.querySelector('h1')?.textContent).toBe('A shortfall in Observation is possible from 21:00.');
    expect(screen.getAllByText(/past the limit$/, { selector: 'td .sr-only' }).map((cell) => cell.textContent)).toEqual(
      ['40 %, Possible, 21:00, past the limit', '28 %, Possible, 22:00, past the limit'],
    );
    expect(screen.getByText(/^Past the 25 % limit from 21:00 to 22:00\s*\.$/)).toBeInTheDocument();
  });
});
