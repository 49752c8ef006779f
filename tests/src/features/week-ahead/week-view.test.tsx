import { render, screen, waitFor, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { MemoryRouter, useLocation } from 'react-router-dom';
import { beforeEach, describe, expect, it } from 'vitest';
import type { WeekAhead } from '../../../../shared/api/week-outlooks.ts';
import { readChoices } from '../../../../src/features/week-ahead/week-choices.ts';
import { WeekView } from '../../../../src/features/week-ahead/WeekView.tsx';
import { buildWeek, gapOf } from '../../../support/build-week.ts';
import { buildSite } from '../outlook/build-tonight.ts';

const site = buildSite();
const saturdayNight = 14;
const fridayNight = 11;
const tuesdayNight = 2;
const gaps = {
  acute: {
    [saturdayNight]: gapOf(10, 0.69, { bedsThatDoNotExist: 6, nurseHours: 26.25 }),
    [tuesdayNight]: gapOf(3, 0.3),
  },
  obs: { [fridayNight]: gapOf(4, 0.4) },
};

function Address() {
  return <output data-testid="address">{useLocation().search}</output>;
}

function show(week: WeekAhead, address = '/', refreshError: unknown = null, then = false) {
  return render(
    <MemoryRouter initialEntries={[address]}>
      <WeekView
        week={week}
        site={site}
        refreshError={refreshError}
        emptyActions={<a href="/models">Go to Arrival model</a>}
        links={null}
        calendarLink={null}
        setLimit={null}
        how={null}
        then={then}
      />
      <Address />
    </MemoryRouter>,
  );
}

beforeEach(() => {
  // jsdom lays nothing out and scrolls nothing.
  Element.prototype.scrollTo = () => undefined;
  HTMLDialogElement.prototype.showModal = function () {
    this.open = true;
  };
});

// By attribute: a query by role walks the whole board for each call.
function labelled(name: string): HTMLElement {
  const found = document.querySelector<HTMLElement>(`[role="region"][aria-label="${name}"]`);
  if (!found) throw new Error(`no region ${name}`);
  return found;
}
function tableOf(caption: string): HTMLTableElement {
  const found = [...document.querySelectorAll('table')].find((table) => table.caption?.textContent === caption);
  if (!found) throw new Error(`no table ${caption}`);
  return found;
}
function button(name: string): HTMLButtonElement {
  const found = [...document.querySelectorAll('button')].find((candidate) => candidate.textContent === name);
  if (!found) throw new Error(`no button ${name}`);
  return found;
}
const rowsOf = (region: string) => [...labelled(region).querySelectorAll('tbody tr')];
const gapRows = () => rowsOf('Gaps between need and plan').map((row) => row.textContent);

describe('the week ahead', () => {
  it('begins with the sentence, the cautions that are true and the ages of its grounds', () => {
    const { container } = show(buildWeek(gaps));
    expect(document.querySelector('h1')).toHaveTextContent('Saturday Night needs ten more Acute beds.');
    expect(container).toHaveTextContent('Book by Fri 4 Dec, 21:00.');
    expect(container).toHaveTextContent('Lantern fair on 2026-12-05: unlike any day in the log');
    expect(container).toHaveTextContent('Computed 5 hours ago');
    expect(container).toHaveTextContent('Plan version 3, saved 24 hours ago by Tomas Okoro-Lind');
    expect(container).toHaveTextContent('A low chance is not a reason to staff below your safe minimum.');
    expect(container).toHaveTextContent('use your incident plan');
  });

  it('lists gaps worst first with number, mark and word, what does not exist, nurse hours and the last chance to book', () => {
    show(buildWeek(gaps));
    const rows = gapRows();
    expect(rows).toHaveLength(3);
    expect(rows[0]).toMatch(
      /Sat 5 Dec Night21:00 to 07:30Acute20\+106 do not exist.*69 %,Likely.*26\.3Fri 4 Dec, 21:00$/,
    );
    expect(rows[1]).toMatch(/Fri 4 Dec Night.*Observation.*\+4.*Possible.*not statedThu 3 Dec, 21:00$/);
    expect(rows[2]).toMatch(/Tue 1 Dec Night.*\+3.*passed$/);
  });

  it('orders by last chance to book on a press, and keeps that in the address', async () => {
    show(buildWeek(gaps));
    await userEvent.click(button('Order by last chance to book'));
    expect(screen.getByTestId('address')).toHaveTextContent('?order=booking');
    expect(gapRows().map((row) => row?.slice(0, 15))).toEqual([
      'Fri 4 Dec Night',
      'Sat 5 Dec Night',
      'Tue 1 Dec Night',
    ]);
  });

  it('shows as many days as the address asks for, three shifts each and those left of today', () => {
    show(buildWeek(gaps), '/?days=10');
    expect(tableOf('Acute, shift by shift').querySelectorAll('thead th')).toHaveLength(1 + 33);
    expect(readChoices(new URLSearchParams('days=14')).days).toBe(14);
    for (const odd of ['', 'days=400', 'days=6', 'days=seven', 'days=7.5']) {
      expect(readChoices(new URLSearchParams(odd)), odd).toEqual({ days: 7, order: 'worst', mapAreaId: null });
    }
  });

  it('says every cell of the board in full, and opens the worst area by itself', async () => {
    show(buildWeek(gaps));
    const table = tableOf('Acute, shift by shift');
    expect(within(table).getByText('69 %, Likely, Night, Sat 5 Dec, past the limit')).toBeInTheDocument();
    expect(within(table).getByText('10 to add, Night, Sat 5 Dec, of which 6 do not exist')).toBeInTheDocument();
    expect(button('Acute')).toHaveAttribute('aria-expanded', 'true');
    const observation = button('Observation');
    expect(observation).toHaveAttribute('aria-expanded', 'false');
    await userEvent.click(observation);
    expect(observation).toHaveAttribute('aria-expanded', 'true');
  });

  it('has both kinds of admissions by day, the calendar with its range and ground, and says that last week is missing', () => {
    show(buildWeek(gaps));
    expect(rowsOf('Admissions, day by day')[0]).toHaveTextContent('Rest of today40 36 to 4542 38 to 47');
    expect(rowsOf('Calendar days in the fourteen days ahead')[0]).toHaveTextContent(
      'Lantern fairlocal event+12 %+4 % to +21 %Stated by your site',
    );
    expect(screen.getByText(/No forecast of the week was issued a week ago/)).toBeInTheDocument();
  });

  it('shows last week’s forecast against what came, and says where each day fell', () => {
    const past = (d: number, count: number | null) => ({
      date: `2026-11-2${String(d)}`,
      from: Date.UTC(2026, 10, 20 + d) / 1000,
      to: Date.UTC(2026, 10, 21 + d) / 1000,
      p2_5: 150,
      p10: 160,
      p25: 170,
      p50: 180,
      p75: 190,
      p90: 200,
      p97_5: 212,
      count,
    });
    const days = [past(4, 180), past(5, 198), past(6, 208), past(7, 230), past(8, null)];
    show(
      buildWeek(gaps, {
        lastWeek: { outlookId: 'w', recomputed: false, issuedAt: Date.UTC(2026, 10, 23, 5) / 1000, days },
      }),
    );
    const rows = rowsOf('Last week: arrivals forecast and what came');
    expect(rows.map((row) => row.lastElementChild?.textContent)).toEqual([
      'within the 50 % range',
      'within the 80 % range',
      'within the 95 % range',
      'above the 95 % range',
      'no log speaks of it',
    ]);
    expect(screen.getByText(/2 of 4 days fell within the 80 % range/)).toBeInTheDocument();
  });

  it('says of a forecast of last week that was made afterwards that it was', () => {
    const lastWeek = { outlookId: 'w', recomputed: true, issuedAt: Date.UTC(2026, 10, 23, 5) / 1000, days: [] };
    show(buildWeek(gaps, { lastWeek }));
    expect(screen.getByText(/No forecast had been issued then: this one was made afterwards/)).toBeInTheDocument();
  });

  it('tells who waits past the site’s limit, what beds it takes, and where that cannot be known', () => {
    const week = buildWeek(gaps);
    const result = week.outlook?.result;
    if (!result) throw new Error('the week has an outlook');
    const shift = (overLimit: number, bedsToAdd: number | null) => ({
      arrivals: 30,
      meanMinutes: 41,
      overLimit,
      bedsToAdd,
    });
    const waits = {
      limitMinutes: 60,
      share: 0.1,
      replications: 400,
      areas: result.areas.map((_, a) =>
        a === 0
          ? result.shifts.map((_, s) =>
              s === saturdayNight ? shift(0.31, 4) : s === fridayNight ? shift(0.2, null) : shift(0.02, 0),
            )
          : null,
      ),
    };
    const withWaits = (own: typeof waits | null) =>
      ({ ...week, outlook: week.outlook && { ...week.outlook, result: { ...result, waits: own } } }) as WeekAhead;
    const shown = show(withWaits(waits));
    expect(
      screen.getByText(/In 2 shifts more than 10.% of arrivals are expected to wait longer than 60 minutes/),
    ).toBeInTheDocument();
    const rows = rowsOf('Waits for a bed space by shift').map((row) => row.textContent);
    expect(rows).toHaveLength(2);
    expect(rows[0]).toMatch(/31 %41 minutes30\+4$/);
    expect(rows[1]).toMatch(/every space is not enough$/);
    expect(screen.getByText(/Not known for/)).toBeInTheDocument();
    shown.unmount();
    const unknown = show(withWaits({ ...waits, areas: result.areas.map(() => null) }));
    expect(screen.getByText(/cannot be known: the logs hold no bed-space times/)).toBeInTheDocument();
    unknown.unmount();
    show(withWaits(null));
    expect(screen.getByText(/Your site has stated no wait limit/)).toBeInTheDocument();
  });

  it('prints every value of the heat map, of the whole department or of the area in the address', async () => {
    show(buildWeek(gaps), '/?area=obs');
    const map = () => document.querySelector<HTMLElement>('[role="grid"]') ?? document.body;
    expect(within(map()).getAllByText('1.0')).toHaveLength(168);
    await userEvent.selectOptions(screen.getByLabelText('Arrivals of'), 'the whole department');
    expect(screen.getByTestId('address')).toBeEmptyDOMElement();
    expect(within(map()).getByLabelText('Monday 20:00: 8.0 arrivals an hour, the whole department')).toHaveTextContent(
      '8.0',
    );
  });

  it('has every figure of the drawing in the tables behind it', async () => {
    show(buildWeek(gaps));
    await userEvent.click(button('The tables behind this'));
    const dialog = document.querySelector('dialog') ?? document.body;
    expect(within(dialog).getAllByText('Night, Sat 5 Dec')).toHaveLength(2);
    expect(dialog).toHaveTextContent('Arrivals by day: middle figure and 95 % range');
    expect(dialog).toHaveTextContent('By ambulance');
  });

  it('as it stood says then instead of now, and compares with no other week', () => {
    const { container } = show(buildWeek(gaps), '/', null, true);
    expect(container.querySelector('.week-board')).toHaveTextContent(/Then \d\d:\d\d\./);
    expect(container.querySelector('.week-board')).not.toHaveTextContent('Now');
    expect(document.querySelector('#last-week-title')).toBeNull();
    expect(container).not.toHaveTextContent('For tonight read Tonight');
  });

  it('keeps the last good week on the page when a refresh fails', () => {
    show(buildWeek(gaps), '/', new Error('no answer'));
    expect(screen.getByText(/as it was last loaded/)).toBeInTheDocument();
    expect(document.querySelector('h1')).toHaveTextContent('Saturday Night');
  });

  it.each([
    ['no model', 'There is no week ahead: no arrival model is in use.'],
    ['little history', 'There is too little history for a week ahead.'],
    ['no staffed-bed plan', 'There is no week ahead: no staffed-bed plan is saved.'],
    ['not computed yet', 'The week ahead is being computed.'],
  ] as const)('without an outlook (%s) says why and what to do', async (reason, title) => {
    show({ ...buildWeek(), outlook: null, missing: { reason, next: 'Do this.' } });
    expect(document.querySelector('h1')).toHaveTextContent(title);
    expect(screen.getByText('Do this.')).toBeInTheDocument();
    await waitFor(() => expect(document.title).toBe('Week ahead, Farrowmere General · Shoalmark'));
  });
});
