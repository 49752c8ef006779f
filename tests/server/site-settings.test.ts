import { afterAll, beforeAll, beforeEach, describe, expect, test } from 'vitest';
import type { Problem } from '../../shared/api/common.ts';
import type { SettingChange, SiteSettings } from '../../shared/api/site-settings.ts';
import { readCalendar } from '../../server/database/read-calendar.ts';
import { AuditEvent } from '../../server/entities/AuditEvent.ts';
import type { CareArea } from '../../server/entities/CareArea.ts';
import { Shift } from '../../server/entities/Shift.ts';
import { Site } from '../../server/entities/Site.ts';
import { buildPerson, buildSite, type BuiltSite } from '../support/build-site.ts';
import { openTestServer, type SignedIn, type TestServer } from '../support/test-server.ts';

const now = Date.parse('2026-11-30T19:00:00Z') / 1000;

let server: TestServer;
let built: BuiltSite;
let operations: SignedIn;
let charge: SignedIn;
let path: string;

beforeAll(async () => {
  server = await openTestServer({ now });
});
afterAll(() => server.close());
beforeEach(async () => {
  const { database } = server.deps;
  built = await buildSite(database);
  const siteId = built.site.id;
  operations = await server.signedInAs(
    (await buildPerson(database, [{ role: 'operations', siteId }], 'Ola Manager')).id,
  );
  charge = await server.signedInAs((await buildPerson(database, [{ role: 'charge', siteId }])).id);
  path = `/api/sites/${siteId}/settings`;
});

const read = async (as = operations) => (await as.get(path)).body as SiteSettings;
const history = async () => ((await operations.get(`${path}/history`)).body as { changes: SettingChange[] }).changes;
const told = async () =>
  (await history()).map(({ madeBy, subject, setting, before, after }) => [madeBy, subject, setting, before, after]);
const faultsOf = (text: string) =>
  ((JSON.parse(text) as Problem).faults ?? []).map(({ at, message }) => `${at}: ${message}`);
const put = (part: string, body: object) => operations.send('put', `${path}/${part}`, body);

const rules = {
  revision: 0,
  planningRisk: 0.1,
  waitLimitMinutes: null,
  bedMeetingMinutes: [600, 960],
  country: 'GB',
  region: 'ENG',
};
const areaValues = ({ id, alertLimit, escalationNote, bedStep, noticeHours }: CareArea) => ({
  id,
  alertLimit,
  escalationNote,
  bedStep,
  noticeHours,
  bedsPerNurse: null as number | null,
  lendsTo: [] as string[],
});

describe('the settings of a site', () => {
  test('are read by whoever reads Tonight, with public holidays, and without the on-call address', async () => {
    await server.deps.database.write((manager) =>
      manager.update(Site, { id: built.site.id }, { onCallAddress: 'on-call@farrowmere.example' }),
    );
    const reply = await charge.get(path);
    expect(reply.text).not.toContain('on-call@');
    const settings = reply.body as SiteSettings;
    expect(settings.revisions).toEqual({ rules: 0, shifts: 0, areas: 0, calendar: 0, 'on-call': 0 });
    expect(settings.site).toMatchObject({ bedMeetingMinutes: [600, 960], waitLimitMinutes: null, region: 'ENG' });
    // GOV.UK, bank holidays of England and Wales: 25 December 2026, and 28 December in place of the 26th, a Saturday.
    const dates = settings.publicHolidays.map(({ date }) => date);
    expect(dates).toEqual(expect.arrayContaining(['2026-12-25', '2026-12-28', '2027-01-01', '2027-03-26']));
    expect((await charge.get(`${path}/history`)).status).toBe(403);
  });

  test('planning rules: saved, told with old and new, refused for an unknown country or region', async () => {
    const changed = {
      ...rules,
      planningRisk: 0.05,
      waitLimitMinutes: 240,
      bedMeetingMinutes: [960, 510],
      region: 'SCT',
    };
    expect((await put('rules', changed)).body).toEqual({ revision: 4, outlookId: null });
    expect((await read()).site).toMatchObject({
      planningRisk: 0.05,
      waitLimitMinutes: 240,
      bedMeetingMinutes: [510, 960],
      region: 'SCT',
    });
    expect(await told()).toEqual([
      ['Ola Manager', null, 'Planning risk', '10 %', '5 %'],
      ['Ola Manager', null, 'Wait limit', null, '240 min'],
      ['Ola Manager', null, 'Bed-meeting times', '10:00, 16:00', '08:30, 16:00'],
      ['Ola Manager', null, 'Region of public holidays', 'ENG', 'SCT'],
    ]);
    const where = { siteId: built.site.id, event: 'site-settings.changed' };
    expect(await server.deps.database.read.countBy(AuditEvent, where)).toBe(1);
    expect(faultsOf((await put('rules', { ...rules, revision: 4, country: 'ZZ', region: null })).text)).toEqual([
      'country: Public holidays of the country “ZZ” are not known. Choose one of the list.',
    ]);
    expect(faultsOf((await put('rules', { ...rules, revision: 4, region: 'NOWHERE' })).text)).toEqual([
      'region: United Kingdom has no holiday region “NOWHERE”. Choose one of the list, or none.',
    ]);
    const wrong = {
      ...rules,
      revision: 4,
      planningRisk: 0.9,
      waitLimitMinutes: 0,
      bedMeetingMinutes: [600, 600, 1440],
    };
    expect(faultsOf((await put('rules', wrong)).text)).toHaveLength(4);
    expect(await history()).toHaveLength(4);
  });

  test('shifts: a hole and an overlap above two hours are refused with the shift named', async () => {
    const shifts = (await read()).site.shifts.map((shift) => ({ ...shift, leadTimeHours: 48 }));
    const [early, late, night] = shifts;
    const refused = await put('shifts', {
      revision: 0,
      shifts: [{ ...early, endMinute: 830 }, { ...late, endMinute: 1440 - 1 }, night],
    });
    expect(refused.status).toBe(400);
    expect(faultsOf(refused.text)).toEqual([
      'shifts.2.startMinute: Late and Night: They overlap by 2 h 59 min; a handover lasts 2 hours at most.',
      'shifts.0.endMinute: Early: No shift is on from 13:50 to 14:00.',
    ]);
    expect(await history()).toEqual([]);

    const split = [
      { ...early, name: 'Day', endMinute: 1200 },
      { ...night, startMinute: 1140 },
      { id: null, name: 'Middle', startMinute: 1100, endMinute: 1200, leadTimeHours: null },
    ];
    expect((await put('shifts', { revision: 0, shifts: split })).status).toBe(200);
    expect((await read()).site.shifts.map(({ name, startMinute }) => [name, startMinute])).toEqual([
      ['Day', 420],
      ['Middle', 1100],
      ['Night', 1140],
    ]);
    expect(await told()).toEqual([
      ['Ola Manager', 'Late', 'Shift', '14:00 to 21:30', null],
      ['Ola Manager', 'Day', 'Shift’s name', 'Early', 'Day'],
      ['Ola Manager', 'Day', 'Shift', '07:00 to 14:30', '07:00 to 20:00'],
      ['Ola Manager', 'Day', 'Lead time to book', null, '48 h'],
      ['Ola Manager', 'Night', 'Shift', '21:00 to 07:30', '19:00 to 07:30'],
      ['Ola Manager', 'Night', 'Lead time to book', null, '48 h'],
      ['Ola Manager', 'Middle', 'Shift', null, '18:20 to 20:00'],
    ]);
  });

  test('shifts: another site’s, or one named twice, is refused', async () => {
    const other = await buildSite(server.deps.database);
    const foreign = await server.deps.database.read.findOneByOrFail(Shift, { siteId: other.site.id, name: 'Early' });
    const [early, late, night] = (await read()).site.shifts;
    const reply = await put('shifts', {
      revision: 0,
      shifts: [{ ...early, id: foreign.id }, late, { ...night, id: late.id }],
    });
    expect(faultsOf(reply.text)).toEqual([
      'shifts.0: This shift does not belong to the site.',
      'shifts.2: Night stands for a shift that is named twice.',
    ]);
  });

  test('care areas: saved one or all, refused whole with each area named', async () => {
    const [acute, resuscitation] = built.areas;
    const changed = {
      ...areaValues(resuscitation),
      alertLimit: 0.1,
      escalationNote: 'Call the consultant in charge.',
      bedsPerNurse: 1,
      lendsTo: [acute.id],
    };
    expect((await put('areas', { revision: 0, areas: [changed] })).status).toBe(200);
    expect(await told()).toEqual([
      ['Ola Manager', 'Resuscitation', 'Alert limit', '25 %', '10 %'],
      ['Ola Manager', 'Resuscitation', 'Escalation text', 'Call the site manager.', 'Call the consultant in charge.'],
      ['Ola Manager', 'Resuscitation', 'Beds a nurse looks after', null, '1'],
      ['Ola Manager', 'Resuscitation', 'Lends beds to', null, 'Acute'],
    ]);
    const { areas } = (await read()).site;
    expect(areas.map(({ alertLimit, lendsTo }) => [alertLimit, lendsTo])).toEqual([
      [0.25, []],
      [0.1, [acute.id]],
    ]);
    // The audit trail names the text that was changed; what it says stands in the history only.
    const event = await server.deps.database.read.findOneByOrFail(AuditEvent, { siteId: built.site.id });
    expect(event.detail).toContain('Escalation text');
    expect(event.detail).not.toContain('consultant');

    const refused = await put('areas', {
      revision: 4,
      areas: [
        { ...areaValues(acute), bedStep: 21, lendsTo: [acute.id, 'nowhere'] },
        { ...areaValues(resuscitation), escalationNote: 'Call Mrs Olivia Fairweather on 020 7946 0018' },
        { ...areaValues(acute), id: 'nothing' },
      ],
    });
    expect(refused.text).not.toContain('Fairweather');
    expect(faultsOf(refused.text)).toEqual([
      'Acute, step: A step of 21 is more than the 20 bed spaces that exist.',
      'Acute: An area cannot lend to itself.',
      'Acute: It lends to an area that is not of this site.',
      expect.stringMatching(/^Resuscitation, escalation text: It seems to hold an? /),
      'areas.2: This care area does not belong to the site.',
    ]);
    const out = { ...areaValues(acute), alertLimit: 1, noticeHours: -1, bedsPerNurse: 0 };
    expect(faultsOf((await put('areas', { revision: 4, areas: [out] })).text)).toHaveLength(3);
    expect(await history()).toHaveLength(4);
  });

  test('what somebody else changed meanwhile is not overwritten, and saving what stands writes nothing', async () => {
    expect((await put('rules', rules)).body).toEqual({ revision: 0, outlookId: null });
    expect(await history()).toEqual([]);
    await put('rules', { ...rules, planningRisk: 0.2 });
    const late = await put('rules', { ...rules, planningRisk: 0.3 });
    expect(late.status).toBe(409);
    expect(late.text).toContain('Somebody else changed “Planning rules” meanwhile.');
    expect((await read()).site.planningRisk).toBe(0.2);
    // Another part is another matter.
    expect((await put('areas', { revision: 0, areas: [areaValues(built.areas[0])] })).status).toBe(200);
  });

  test('calendar: days are added with their effect, known to forecasts, taken out again', async () => {
    const fair = {
      from: '2026-12-05',
      until: '2026-12-06',
      kind: 'local event',
      name: 'Lantern fair',
      statedEffect: [1.1, 1.3],
    };
    const post = (body: object) => operations.send('post', `${path}/calendar`, body);
    expect((await post(fair)).status).toBe(201);
    const { ownDays } = await read(charge);
    expect(ownDays.map(({ date, name, statedEffect }) => [date, name, statedEffect])).toEqual([
      ['2026-12-05', 'Lantern fair', [1.1, 1.3]],
      ['2026-12-06', 'Lantern fair', [1.1, 1.3]],
    ]);
    const days = await readCalendar(server.deps.database.read, built.site, now, now + 8 * 86_400);
    expect(days.map(({ date, kind }) => [date, kind])).toEqual([
      ['2026-12-05', 'local event'],
      ['2026-12-06', 'local event'],
    ]);
    expect(faultsOf((await post(fair)).text)).toEqual([
      '2026-12-05: “Lantern fair” stands there already. Take it out first to change it.',
      '2026-12-06: “Lantern fair” stands there already. Take it out first to change it.',
    ]);
    const wrong: [object, RegExp][] = [
      [{ ...fair, from: '2026-02-30' }, /^from: This date does not exist/],
      [{ ...fair, until: '2026-12-04' }, /^until: The last day must not lie before/],
      [{ ...fair, until: '2027-12-04' }, /^until: At most 62 days/],
      [{ ...fair, from: '2031-12-05', until: '2031-12-05' }, /^until: Days more than three years ahead/],
      [{ ...fair, name: 'Visit of Mrs Olivia Fairweather' }, /^name: It seems to hold a/],
      [{ ...fair, statedEffect: [1.3, 1.1] }, /^statedEffect: The lower end comes first/],
      [{ ...fair, statedEffect: [0, 1] }, /^statedEffect\.0: Not below/],
      [{ ...fair, kind: 'public holiday' }, /^kind: /],
    ];
    for (const [body, fault] of wrong) {
      const reply = await post(body);
      expect([reply.status, ...faultsOf(reply.text)]).toEqual([400, expect.stringMatching(fault)]);
    }
    expect((await operations.send('delete', `${path}/calendar/${ownDays[0].id}`)).status).toBe(200);
    expect((await operations.send('delete', `${path}/calendar/${ownDays[0].id}`)).status).toBe(404);
    expect((await read()).ownDays).toHaveLength(1);
    expect((await told())[0]).toEqual([
      'Ola Manager',
      'Lantern fair, 2026-12-05',
      'Calendar day',
      null,
      'Local event, arrivals +10 % to +30 %',
    ]);
  });

  test('another site’s calendar day is not found', async () => {
    const other = await buildSite(server.deps.database);
    const stranger = await server.signedInAs(
      (await buildPerson(server.deps.database, [{ role: 'operations', siteId: other.site.id }])).id,
    );
    await operations.send('post', `${path}/calendar`, {
      from: '2026-12-05',
      until: '2026-12-05',
      kind: 'closure',
      name: 'Scanner closed',
      statedEffect: null,
    });
    const [{ id }] = (await read()).ownDays;
    expect((await stranger.send('delete', `/api/sites/${other.site.id}/settings/calendar/${id}`)).status).toBe(404);
    expect((await read()).ownDays).toHaveLength(1);
  });

  test('the on-call address stands in the history too', async () => {
    await operations.send('put', `/api/sites/${built.site.id}/on-call-address`, {
      address: 'on-call@farrowmere.example',
    });
    expect(await told()).toEqual([['Ola Manager', null, 'On-call address', null, 'on-call@farrowmere.example']]);
  });

  test('holiday regions are those of the standard, with names', async () => {
    const reply = await operations.get(`${path}/holiday-regions`);
    const { countries } = reply.body as { countries: { code: string; name: string; regions: { code: string }[] }[] };
    expect(countries.length).toBeGreaterThan(150);
    // ISO 3166-2:GB: England, Northern Ireland, Scotland, Wales.
    const regions = countries.find(({ code }) => code === 'GB')?.regions.map(({ code }) => code);
    expect(regions).toEqual(expect.arrayContaining(['ENG', 'NIR', 'SCT', 'WLS']));
  });
});
