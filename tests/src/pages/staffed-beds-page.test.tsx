import '@testing-library/jest-dom/vitest';
import { QueryClient, QueryClientProvider } from '@tanstack/react-query';
import { configure, fireEvent, render, screen, waitFor, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { MemoryRouter, Route, Routes } from 'react-router-dom';
import { afterEach, beforeAll, describe, expect, test, vi } from 'vitest';
import type { PlanVersion, RequiredBeds } from '../../../shared/api/staffed-beds.ts';
import { SessionProvider, type SignedInSession } from '../../../src/features/sign-in/session.ts';
import { StaffedBedsPage } from '../../../src/pages/StaffedBedsPage.tsx';
import { buildArea, buildSite } from '../features/outlook/build-tonight.ts';

const site = {
  ...buildSite([
    buildArea({ spaces: 24, safeMinimum: 12, bedStep: 2 }),
    buildArea({ id: 'obs', name: 'Observation', spaces: 6, safeMinimum: 2 }),
  ]),
  shifts: [
    { id: 'day', name: 'Day', startMinute: 420, endMinute: 1200, leadTimeHours: 48 },
    { id: 'night', name: 'Night', startMinute: 1140, endMinute: 450, leadTimeHours: null },
  ],
};
/** Monday 7 December 2026, 07:00 in London. */
const monday = Date.UTC(2026, 11, 7, 7) / 1000;
const required: RequiredBeds = {
  issuedAt: monday - 86_400,
  planningRisk: 0.1,
  areas: [
    { areaId: 'acute', shifts: [{ name: 'Day', from: monday, to: monday + 46_800, beds: 18, doNotExist: 0 }] },
    { areaId: 'obs', shifts: [{ name: 'Day', from: monday, to: monday + 46_800, beds: 3, doNotExist: 0 }] },
  ],
};
const week = (beds: number) => new Array<number>(336).fill(beds);

interface Sent {
  areas: { areaId: string; halfHours: number[] }[];
  reason: string;
  basedOnVersion: number;
}

/** A server with one version of the plan; what is sent to it is noted. */
function serve({ permissions = ['staffed-beds:plan'], known = true, path = '/sites/general/beds' } = {}) {
  const versions: (PlanVersion & { areas: Sent['areas'] })[] = [
    {
      version: 1,
      savedAt: 1_790_000_000,
      savedBy: 'Ola Manager',
      reason: 'As every week',
      areas: [
        { areaId: 'acute', halfHours: week(16) },
        { areaId: 'obs', halfHours: week(4) },
      ],
    },
  ];
  const sent: { method: string; path: string; body: unknown }[] = [];
  vi.stubGlobal('fetch', (address: string, init: RequestInit) => {
    const body: unknown = typeof init.body === 'string' ? JSON.parse(init.body) : undefined;
    const answer = (reply: object, status = 200) => Promise.resolve(new Response(JSON.stringify(reply), { status }));
    if (init.method !== 'GET') sent.push({ method: init.method ?? '', path: address, body });
    if (address === '/api/sites/general') return answer(site);
    if (address.endsWith('/required'))
      return answer(known ? required : { issuedAt: null, planningRisk: 0.1, areas: [] });
    if (address.endsWith('/versions')) return answer({ versions: versions.toReversed() });
    const one = /versions\/(\d+)$/.exec(address);
    if (one) return answer(versions[Number(one[1]) - 1]);
    if (address.endsWith('/staffed-beds') && init.method === 'GET')
      return answer({ plan: versions.at(-1), changes: [] });
    if (address.endsWith('/staffed-beds')) {
      const { areas, reason, basedOnVersion } = body as Sent;
      if (basedOnVersion !== versions.length) {
        const problem = { type: 'about:blank', title: 'Conflict', status: 409, detail: 'Somebody saved meanwhile.' };
        return answer(problem, 409);
      }
      versions.push({ version: versions.length + 1, savedAt: 1_790_000_600, savedBy: 'Ada', reason, areas });
      return answer({ version: versions.length });
    }
    if (address.endsWith('/staffed-bed-exceptions')) return answer({ changeId: 'x', outlookId: null }, 201);
    return answer({}, 404);
  });
  const session = {
    sites: [{ id: 'general', name: site.name, timeZone: site.timeZone, permissions }],
  } as unknown as SignedInSession;
  render(
    <QueryClientProvider client={new QueryClient({ defaultOptions: { queries: { retry: false } } })}>
      <SessionProvider value={session}>
        <MemoryRouter initialEntries={[path]}>
          <Routes>
            <Route path="/sites/:siteId/beds" element={<StaffedBedsPage />} />
          </Routes>
        </MemoryRouter>
      </SessionProvider>
    </QueryClientProvider>,
  );
  return { sent, versions, user: userEvent.setup() };
}

const grid = () => screen.findByRole('grid', { name: /area, shift and day/ });
const cell = async (row: number, column: number) =>
  within(
    within(await grid())
      .getAllByRole('row')
      .filter((one) => within(one).queryAllByRole('gridcell').length > 0)[row],
  ).getAllByRole('gridcell')[column];
const figures = async (row: number) => {
  const found: (string | null)[] = [];
  for (let column = 0; column < 7; column += 1)
    found.push((await cell(row, column)).querySelector('span')?.textContent ?? null);
  return found;
};
const lastSent = (sent: { body: unknown }[]) => sent.at(-1)?.body as Sent;

// The whole grid is drawn for each answer; a busy machine takes its time.
configure({ asyncUtilTimeout: 5000 });
beforeAll(() => {
  HTMLDialogElement.prototype.showModal = function (this: HTMLDialogElement) {
    this.open = true;
  };
});
afterEach(() => vi.unstubAllGlobals());

describe('the staffed-bed plan', () => {
  test('shows each shift with what is needed, says the worst first, and tells the chosen cell in words', async () => {
    serve();
    expect(await screen.findByRole('heading', { level: 1, name: 'Acute on Monday Day is 2 beds short' })).toBeVisible();
    expect(await cell(0, 0)).toHaveTextContent('162 short of 18');
    expect(await cell(2, 0)).toHaveTextContent('4needs 3');
    expect(await cell(0, 1)).toHaveTextContent(/^16$/);
    expect(
      screen.getByText(
        /^Acute, Day, Monday: 16 beds planned\. Monday 07:00 to Monday 19:00\. 18 beds needed at 10 % risk on Mon 7 Dec: 2 short\.$/,
      ),
    ).toBeVisible();
  });

  test('before a week outlook what is needed is not known, and never looks met', async () => {
    serve({ known: false });
    expect(await screen.findByRole('heading', { level: 1, name: /what is needed is not known yet/ })).toBeVisible();
    expect(screen.getByText(/Acute, Day, Monday: 16 beds planned\..*What is needed is not known yet\.$/)).toBeVisible();
  });

  test('is worked by keyboard alone: arrows, typing, Escape, a range, undo, save with a reason', async () => {
    const { user, sent } = serve();
    const first = await cell(0, 0);
    first.focus();
    await user.keyboard('18{Enter}');
    expect(await cell(1, 0)).toHaveFocus();
    expect((await figures(0))[0]).toBe('18');
    // Escape leaves the cell as it was.
    await user.keyboard('9{Escape}');
    expect(await cell(1, 0)).toHaveFocus();
    expect((await figures(1))[0]).toBe('16');
    // The night's whole week at once, then one step back and forth.
    await user.keyboard('{Shift>} {/Shift}20{Enter}');
    expect(screen.getByText('7 cells set.')).toBeVisible();
    expect(await figures(1)).toEqual(new Array(7).fill('20'));
    await user.keyboard('{Control>}z{/Control}');
    expect(await figures(1)).toEqual(new Array(7).fill('16'));
    await user.keyboard('{Control>}y{/Control}');
    expect(await figures(1)).toEqual(new Array(7).fill('20'));

    expect(screen.getByRole('heading', { name: 'Not saved yet: 9 changes, +360 bed-hours a week' })).toBeVisible();
    await user.click(screen.getByRole('button', { name: 'Save as version 2' }));
    expect(await screen.findByRole('alert')).toHaveTextContent('Say why');
    expect(sent).toEqual([]);
    await user.type(screen.getByLabelText('Reason', { selector: 'textarea' }), 'Winter nights');
    await user.click(screen.getByRole('button', { name: 'Save as version 2' }));
    expect(await screen.findByText(/^Version 2, saved by Ada/)).toBeVisible();
    const { areas, reason, basedOnVersion } = lastSent(sent);
    expect([reason, basedOnVersion]).toEqual(['Winter nights', 1]);
    const acute = areas.find(({ areaId }) => areaId === 'acute')!.halfHours;
    // Monday 06:30 and Monday 19:00 are of nights, Monday 07:00 to 18:30 was set alone, Tuesday's day stands.
    expect([13, 14, 37, 38, 61, 62].map((halfHour) => acute[halfHour])).toEqual([20, 18, 18, 20, 20, 16]);
    expect(areas.find(({ areaId }) => areaId === 'obs')!.halfHours).toEqual(week(4));
    expect(screen.queryByRole('heading', { name: /Not saved yet/ })).toBeNull();
  });

  test('takes a block pasted from a spreadsheet, whole or not at all', async () => {
    const { user } = serve();
    (await cell(0, 0)).focus();
    await user.paste('18\t19\r\n20\t21\r\n');
    expect((await figures(0)).slice(0, 3)).toEqual(['18', '19', '16']);
    expect((await figures(1)).slice(0, 3)).toEqual(['20', '21', '16']);
    expect(screen.getByText('4 cells pasted.')).toBeVisible();
    await user.paste('Day\t19');
    expect(
      screen.getByText('Line 1 of what was pasted, cell 1: not a whole number. Nothing was changed.'),
    ).toBeVisible();
    await user.paste('1\t2\t3\t4\t5\t6\t7\t8');
    expect(screen.getByText(/is 1 by 8 cells and does not fit from here/)).toBeVisible();
    await user.paste('18\t19\n20');
    expect(screen.getByText(/Line 2 of what was pasted has 1 cells, the first has 2/)).toBeVisible();
    expect((await figures(0)).slice(0, 3)).toEqual(['18', '19', '16']);
    // One figure fills the range.
    await user.keyboard('{Shift>}{ArrowRight}{ArrowDown}{/Shift}');
    await user.paste('22');
    expect((await figures(1)).slice(0, 3)).toEqual(['22', '22', '16']);
  });

  test('copies the range as a spreadsheet takes it', async () => {
    const { user } = serve();
    (await cell(0, 0)).focus();
    await user.keyboard('18{Enter}{ArrowUp}{Shift>}{ArrowRight}{ArrowDown}{/Shift}');
    const setData = vi.fn();
    fireEvent.copy(await cell(1, 1), { clipboardData: { setData } });
    expect(setData).toHaveBeenCalledWith('text/plain', '18\t16\n16\t16');
  });

  test('names every cell that keeps it from being saved, and a reduction', async () => {
    const { user } = serve();
    (await cell(0, 0)).focus();
    await user.keyboard('11{Enter}25{Enter}{Delete}');
    const faults = within(screen.getByRole('alert'))
      .getAllByRole('listitem')
      .map(({ textContent }) => textContent);
    expect(faults).toEqual([
      'Acute, Monday 07:00 to 19:00: 11 is below the safe minimum of 12.',
      'Acute, Monday 19:00 to Tuesday 07:00: 25 is beyond the 24 bed spaces that exist.',
      'Observation, Monday 07:00 to 19:00: No figure stands here: the plan would have a hole.',
    ]);
    expect(await cell(0, 0)).toHaveAttribute('aria-invalid', 'true');
    expect(screen.getByRole('button', { name: 'Save as version 2' })).toBeDisabled();
    expect(screen.getByText('1 stretch with fewer beds than before')).toBeVisible();
    expect(screen.getByLabelText('Reason, and why fewer beds')).toBeVisible();
    await user.click(screen.getByRole('button', { name: 'Discard all changes' }));
    expect(screen.queryByRole('alert')).toBeNull();
    expect((await figures(0))[0]).toBe('16');
  });

  test('opens by half hour, where a part of a shift is changed', async () => {
    const { user } = serve({ path: '/sites/general/beds?halfHours=obs' });
    const detail = await screen.findByRole('grid', { name: /Observation by half hour/ });
    const row = within(detail).getAllByRole('row')[1];
    const cells = within(row).getAllByRole('gridcell');
    expect(cells).toHaveLength(48);
    await user.click(cells[14]);
    await user.keyboard('5{Enter}');
    expect(await cell(2, 0)).toHaveTextContent('4–5');
    expect(screen.getByRole('heading', { name: 'Not saved yet: 1 change, +0.5 bed-hours a week' })).toBeVisible();
    await user.click(screen.getAllByRole('button', { name: /^Close half hours/ })[0]);
    expect(screen.queryByRole('grid', { name: /by half hour/ })).toBeNull();
  });

  test('keeps one’s changes when somebody else saved meanwhile, and lays them over the newer version', async () => {
    const { user, versions, sent } = serve();
    (await cell(0, 0)).focus();
    await user.keyboard('18{Enter}');
    versions.push({
      ...versions[0],
      version: 2,
      savedBy: 'Bo Other',
      reason: 'Ward closed',
      areas: [
        { areaId: 'acute', halfHours: week(20) },
        { areaId: 'obs', halfHours: week(4) },
      ],
    });
    await user.type(screen.getByLabelText('Reason', { selector: 'textarea' }), 'Monday is busy');
    await user.click(screen.getByRole('button', { name: 'Save as version 2' }));
    expect(await screen.findByText('Bo Other saved version 2 while you edit')).toBeVisible();
    expect((await figures(0)).slice(0, 2)).toEqual(['18', '16']);
    await user.click(screen.getByRole('button', { name: 'Put my changes on top of it' }));
    expect((await figures(0)).slice(0, 2)).toEqual(['18', '20']);
    await user.type(screen.getByLabelText(/^Reason/, { selector: 'textarea' }), 'Monday is quieter than that');
    await user.click(screen.getByRole('button', { name: 'Save as version 3' }));
    await waitFor(() => expect(lastSent(sent).basedOnVersion).toBe(2));
  });

  test('is for looking only without the permission: no typing, no save', async () => {
    const { user } = serve({ permissions: [] });
    expect(await grid()).toHaveAttribute('aria-readonly', 'true');
    (await cell(0, 0)).focus();
    await user.keyboard('18{Enter}');
    await user.paste('18');
    expect((await figures(0))[0]).toBe('16');
    expect(screen.getByText('Operations managers change the plan.')).toBeVisible();
    expect(screen.queryByRole('button', { name: 'Add the exception' })).toBeNull();
  });

  test('compares a version with the one before it', async () => {
    const { user, versions } = serve();
    await grid();
    (await cell(0, 0)).focus();
    await user.keyboard('18{Enter}');
    await user.type(screen.getByLabelText('Reason', { selector: 'textarea' }), 'Monday is busy');
    await user.click(screen.getByRole('button', { name: 'Save as version 2' }));
    await waitFor(() => expect(versions).toHaveLength(2));
    await user.click(await screen.findByRole('button', { name: 'Compare version 2 with the one before it' }));
    const table = await screen.findByRole('table', {
      name: 'Version 2 against version 1: 1 change, +24 bed-hours a week',
    });
    expect(within(table).getAllByRole('row')[1]).toHaveTextContent('AcuteMonday 07:00 to 19:001618+2');
  });

  test('a dated exception is checked before it is sent, in the site’s own time', async () => {
    const { user, sent } = serve();
    await grid();
    const year = new Date().getUTCFullYear() + 1;
    await user.clear(screen.getByLabelText('Day'));
    await user.type(screen.getByLabelText('Day'), `${String(year)}-01-15`);
    await user.selectOptions(screen.getByLabelText('Shift'), 'Night');
    await user.type(screen.getByLabelText('Staffed beds'), '30');
    await user.click(screen.getByRole('button', { name: 'Add the exception' }));
    expect(await screen.findByText('30 is beyond the 24 bed spaces that exist.')).toBeVisible();
    expect(sent).toEqual([]);
    await user.clear(screen.getByLabelText('Staffed beds'));
    await user.type(screen.getByLabelText('Staffed beds'), '20');
    await user.type(screen.getByLabelText('Reason', { selector: 'input' }), 'Harbour fair');
    await user.click(screen.getByRole('button', { name: 'Add the exception' }));
    await waitFor(() => expect(sent).toHaveLength(1));
    const from = Date.UTC(year, 0, 15, 19) / 1000;
    expect(sent[0].body).toEqual({
      areaId: 'acute',
      fromAt: from,
      untilAt: from + 43_200,
      beds: 20,
      reason: 'Harbour fair',
    });
  });
});
