import '@testing-library/jest-dom/vitest';
import { QueryClient, QueryClientProvider } from '@tanstack/react-query';
import { configure, render, screen, waitFor, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { MemoryRouter, Route, Routes } from 'react-router-dom';
import { afterEach, describe, expect, test, vi } from 'vitest';
import type { LimitRecordReply, SiteSettings } from '../../../shared/api/site-settings.ts';
import { SessionProvider, type SignedInSession } from '../../../src/features/sign-in/session.ts';
import { SiteSettingsPage } from '../../../src/pages/SiteSettingsPage.tsx';
import { buildArea, buildSite } from '../features/outlook/build-tonight.ts';

configure({ asyncUtilTimeout: 5000 });

const night = (chance: number | null, ranShort: boolean | null) => ({ date: '2026-11-30', chance, ranShort });
const nights = [night(0.6, true), night(0.3, false), night(0.1, true), night(0.05, false), night(null, true)];

function serve({ permissions = ['site-settings:edit'] } = {}) {
  const settings: SiteSettings = {
    site: {
      ...buildSite([buildArea(), buildArea({ id: 'obs', name: 'Observation', spaces: 6, safeMinimum: 2 })]),
      region: 'ENG',
      shifts: [
        { id: 'day', name: 'Day', startMinute: 420, endMinute: 1200, leadTimeHours: 48 },
        { id: 'night', name: 'Night', startMinute: 1140, endMinute: 450, leadTimeHours: null },
      ],
    },
    ownDays: [{ id: 'fair', date: '2026-12-05', kind: 'local event', name: 'Lantern fair', statedEffect: [1.1, 1.3] }],
    publicHolidays: [{ date: '2026-12-25', name: 'Christmas Day' }],
    revisions: { rules: 3, shifts: 1, areas: 2, calendar: 0, 'on-call': 0 },
  };
  const record: LimitRecordReply = {
    from: 1,
    to: 2,
    areas: [
      { areaId: 'acute', nights },
      { areaId: 'obs', nights: [] },
    ],
  };
  const sent: { method: string; path: string; body: Record<string, unknown> }[] = [];
  vi.stubGlobal('fetch', (address: string, init: RequestInit) => {
    const answer = (reply: object, status = 200) => Promise.resolve(new Response(JSON.stringify(reply), { status }));
    const path = address.replace('/api/sites/general', '');
    if (init.method !== 'GET') {
      const body = typeof init.body === 'string' ? (JSON.parse(init.body) as Record<string, unknown>) : {};
      sent.push({ method: init.method ?? '', path, body });
      if (path === '/on-call-address') return answer(body);
      return answer({ revision: 9, outlookId: null }, path === '/settings/calendar' ? 201 : 200);
    }
    if (path === '/settings') return answer(settings);
    if (path === '/settings/limit-record') return answer(record);
    if (path === '/on-call-address') return answer({ address: 'on-call@farrowmere.example' });
    if (path === '/settings/holiday-regions') {
      const regions = [
        { code: 'ENG', name: 'England' },
        { code: 'SCT', name: 'Scotland' },
      ];
      return answer({
        countries: [
          { code: 'GB', name: 'United Kingdom', regions },
          { code: 'NZ', name: 'New Zealand', regions: [] },
        ],
      });
    }
    const change = {
      id: 'c',
      at: 1_790_000_000,
      madeBy: 'Ola Manager',
      section: 'areas',
      subject: 'Acute',
      setting: 'Alert limit',
    };
    return answer({ changes: [{ ...change, before: '30 %', after: '25 %' }], total: 1 });
  });
  const session = {
    sites: [{ id: 'general', name: 'Farrowmere General', timeZone: 'Europe/London', permissions }],
  } as unknown as SignedInSession;
  render(
    <QueryClientProvider client={new QueryClient({ defaultOptions: { queries: { retry: false } } })}>
      <SessionProvider value={session}>
        <MemoryRouter initialEntries={['/sites/general/settings']}>
          <Routes>
            <Route path="/sites/:siteId/settings" element={<SiteSettingsPage />} />
          </Routes>
        </MemoryRouter>
      </SessionProvider>
    </QueryClientProvider>,
  );
  return { sent, user: userEvent.setup() };
}

const section = async (name: string) => within(await screen.findByRole('region', { name }));

afterEach(() => vi.unstubAllGlobals());

describe('the settings of a site', () => {
  test('an area’s limit says how often it would have warned, for the figure that stands in the field', async () => {
    const { user, sent } = serve();
    const acute = await section('Acute');
    expect(
      await acute.findByText(
        'Last 8 weeks, 4 of 5 nights known: this limit would have warned on 2, 1 of them for nothing; 2 ran short, 1 missed.',
      ),
    ).toBeVisible();
    const limit = acute.getByLabelText('Alert limit, %');
    await user.clear(limit);
    await user.type(limit, '8');
    expect(
      acute.getByText(
        'Last 8 weeks, 4 of 5 nights known: this limit would have warned on 3, 1 of them for nothing; 2 ran short, none missed.',
      ),
    ).toBeVisible();
    expect((await section('Observation')).getByText('Last 8 weeks: no night has passed yet.')).toBeVisible();
    await user.click(acute.getByLabelText('Observation'));
    await user.type(acute.getByLabelText('Beds a nurse looks after'), '4');
    await user.click(screen.getByRole('button', { name: 'Save care areas' }));
    await waitFor(() => expect(sent).toHaveLength(1));
    expect(sent[0]).toMatchObject({ method: 'PUT', path: '/settings/areas', body: { revision: 2 } });
    const [first, second] = sent[0].body.areas as object[];
    expect(first).toMatchObject({ id: 'acute', alertLimit: 0.08, bedsPerNurse: 4, lendsTo: ['obs'] });
    expect(second).toMatchObject({ id: 'obs', alertLimit: 0.25, bedsPerNurse: null, lendsTo: [] });
  });

  test('what is wrong stands beside its field, and nothing is sent', async () => {
    const { user, sent } = serve();
    const acute = await section('Acute');
    const limit = acute.getByLabelText('Alert limit, %');
    await user.clear(limit);
    await user.type(limit, 'often');
    const text = acute.getByLabelText('Escalation text');
    await user.clear(text);
    await user.type(text, 'Call 020 7946 0018');
    await user.click(screen.getByRole('button', { name: 'Save care areas' }));
    expect(await acute.findByText('Enter a percentage')).toBeVisible();
    expect(
      acute.getByText('This looks like a telephone number. Leave out anything that could identify a person.'),
    ).toBeVisible();
    expect(limit).toHaveAttribute('aria-invalid', 'true');
    expect(sent).toEqual([]);
    await user.click(screen.getByRole('button', { name: 'Leave as it was' }));
    expect(limit).toHaveValue('25');
  });

  test('shifts: a hole and a long overlap are told; a new shift mends them', async () => {
    const { user, sent } = serve();
    const shifts = await section('Shifts and handovers');
    const [dayEnd, nightEnd] = shifts.getAllByLabelText('Ends');
    expect([dayEnd, nightEnd].map((field) => (field as HTMLInputElement).value)).toEqual(['20:00', '07:30']);
    await user.clear(dayEnd);
    await user.type(dayEnd, '15:00');
    await user.click(shifts.getByRole('button', { name: 'Save shifts and handovers' }));
    expect(await shifts.findByText('Day: No shift is on from 15:00 to 19:00.')).toBeVisible();
    await user.click(shifts.getByRole('button', { name: 'Add a shift' }));
    await user.type(shifts.getAllByLabelText('Shift')[2], 'Late');
    await user.type(shifts.getAllByLabelText('Starts')[2], '14:30');
    await user.type(shifts.getAllByLabelText('Ends')[2], '22:00');
    await user.click(shifts.getByRole('button', { name: 'Save shifts and handovers' }));
    expect(await shifts.findByText(/^Night and Late: They overlap by 3 hours/)).toBeVisible();
    const late = shifts.getAllByLabelText('Ends')[2];
    await user.clear(late);
    await user.type(late, '20:00');
    await user.click(shifts.getByRole('button', { name: 'Save shifts and handovers' }));
    await waitFor(() => expect(sent).toHaveLength(1));
    expect(sent[0]).toEqual({
      method: 'PUT',
      path: '/settings/shifts',
      body: {
        revision: 1,
        shifts: [
          { id: 'day', name: 'Day', startMinute: 420, endMinute: 900, leadTimeHours: 48 },
          { id: 'night', name: 'Night', startMinute: 1140, endMinute: 450, leadTimeHours: null },
          { id: null, name: 'Late', startMinute: 870, endMinute: 1200, leadTimeHours: null },
        ],
      },
    });
    expect(await shifts.findByText('Saved.')).toBeVisible();
  });

  test('planning rules: percent, minutes, times and region go as the contract has them', async () => {
    const { user, sent } = serve();
    const rules = await section('Planning rules');
    expect(await rules.findByRole('option', { name: 'Scotland' })).toBeInTheDocument();
    const meetings = rules.getByLabelText('Bed meetings');
    await user.clear(meetings);
    await user.type(meetings, '8:30, 25:00');
    await user.type(rules.getByLabelText('Wait limit, minutes'), '240');
    await user.selectOptions(rules.getByLabelText('Region'), 'Scotland');
    await user.click(rules.getByRole('button', { name: 'Save planning rules' }));
    expect(await rules.findByText('Times like 08:30, with commas between')).toBeVisible();
    await user.clear(meetings);
    await user.type(meetings, '8:30, 16:00');
    await user.click(rules.getByRole('button', { name: 'Save planning rules' }));
    await waitFor(() => expect(sent).toHaveLength(1));
    expect(sent[0].body).toEqual({
      revision: 3,
      planningRisk: 0.1,
      waitLimitMinutes: 240,
      bedMeetingMinutes: [510, 960],
      country: 'GB',
      region: 'SCT',
    });
  });

  test('calendar: a day with its effect in per cent; one is taken out', async () => {
    const { user, sent } = serve();
    const calendar = await section('Calendar');
    const rows = calendar.getAllByRole('row').map(({ textContent }) => textContent);
    expect(rows[1]).toBe('Sat 5 Dec 2026Lantern fairLocal event+10 to +30 % arrivalsTake out');
    expect(rows[2]).toBe('Fri 25 Dec 2026Christmas DayPublic holidayLearned from the log');
    await user.type(calendar.getByLabelText('Day, or the first of several'), '2026-12-12');
    await user.type(calendar.getByLabelText('Name'), 'Harbour run');
    await user.type(calendar.getByLabelText('Arrivals at least, %'), '-10');
    await user.click(calendar.getByRole('button', { name: 'Add to the calendar' }));
    expect(await calendar.findByText('Enter a percentage')).toBeVisible();
    await user.type(calendar.getByLabelText('Arrivals at most, %'), '+20');
    await user.click(calendar.getByRole('button', { name: 'Add to the calendar' }));
    await waitFor(() => expect(sent).toHaveLength(1));
    expect(sent[0].body).toEqual({
      from: '2026-12-12',
      until: '2026-12-12',
      kind: 'local event',
      name: 'Harbour run',
      statedEffect: [0.9, 1.2],
    });
    await user.click(calendar.getByRole('button', { name: 'Take out Lantern fair, Sat 5 Dec 2026' }));
    await waitFor(() => expect(sent.at(-1)).toMatchObject({ method: 'DELETE', path: '/settings/calendar/fair' }));
  });

  test('the on-call address can be taken away; the history tells who changed what', async () => {
    const { user, sent } = serve();
    const onCall = await section('On-call address');
    const field = onCall.getByLabelText('E-mail address');
    expect(field).toHaveValue('on-call@farrowmere.example');
    await user.clear(field);
    await user.type(field, 'nobody');
    await user.click(onCall.getByRole('button', { name: 'Save on-call address' }));
    expect(await onCall.findByText(/^Enter one e-mail address/)).toBeVisible();
    await user.clear(field);
    await user.click(onCall.getByRole('button', { name: 'Save on-call address' }));
    await waitFor(() => expect(sent).toEqual([{ method: 'PUT', path: '/on-call-address', body: { address: null } }]));
    const history = await section('History');
    expect((await history.findAllByRole('row'))[1]).toHaveTextContent('Ola ManagerAcute: alert limit30 %25 %');
    await user.selectOptions(history.getByLabelText('Of'), 'Planning rules');
    expect(await history.findByText('Nothing was changed since the site was set up.')).toBeVisible();
  });

  test('for those who only read, every field stands still and nothing of the address or history is asked for', async () => {
    serve({ permissions: [] });
    const acute = await section('Acute');
    expect(acute.getByLabelText('Alert limit, %')).toBeDisabled();
    expect(screen.getByText('Operations managers change these settings.')).toBeVisible();
    expect(screen.queryByRole('button', { name: /Save|Add|Take out|Remove/ })).toBeNull();
    expect(screen.queryByText('On-call address')).toBeNull();
  });
});
