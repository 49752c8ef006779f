import ICAL from 'ical.js';
import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { getSite } from '../../shared/api/sites.ts';
import { getWeekAhead } from '../../shared/api/week-outlooks.ts';
import { isoWeekday, makeZone } from '../../shared/domain/zoned-time.ts';
import { weekGaps } from '../../shared/forecasting/week-gaps.ts';
import { openBrowser, openPage, signIn, startBuiltDemo, type RunningDemo } from '../support/journey.ts';

const site = '/sites/farrowmere-general';
const patience = 240_000;

/** What the page's own requests are answered: to choose a gap that can be closed, whatever the date. */
async function readWeek(page: Page, url: string) {
  const of = async (path: string) => (await page.request.get(`${url}/api${site}${path}`)).json() as Promise<unknown>;
  return {
    week: getWeekAhead.reply.parse(await of('/week-outlooks/latest')),
    facts: getSite.reply.parse(await of('')),
  };
}

/** Waits until the week ahead stands on a version of the plan. */
async function weekOnVersion(page: Page, url: string, version: number) {
  const until = Date.now() + patience;
  for (;;) {
    const read = await readWeek(page, url);
    if ((read.week.outlook?.planVersion ?? 0) >= version) return read;
    if (Date.now() > until) throw new Error(`no week ahead on version ${String(version)} of the plan`);
    await page.waitForTimeout(1000);
  }
}

describe('the operations manager’s desk, in a real browser on the built demo', () => {
  let demo: RunningDemo;
  let browser: Browser;

  beforeAll(async () => {
    demo = await startBuiltDemo();
    browser = await openBrowser();
  });
  afterAll(async () => {
    await browser.close();
    await demo.stop();
  });

  it('plans a week: closes a gap by keyboard and paste, tries a plan, adopts it, and subscribes a calendar', async () => {
    const { page, noise } = await openPage(browser);
    await signIn(page, demo.url, 'operations', `${site}/week`);

    // The week ahead says where the plan falls short. The smallest gap that the bed spaces allow, with a step to spare.
    const { week, facts } = await weekOnVersion(page, demo.url, 1);
    await page.reload();
    const table = page.getByRole('table', { name: 'Gaps between need and plan' });
    await table.waitFor();
    const all = page.getByRole('button', { name: /^All \d+ gaps$/ });
    if (await all.isVisible()) await all.click();
    const areaOf = (areaId: string) => facts.areas.find(({ id }) => id === areaId) ?? facts.areas[0];
    const result = week.outlook?.result;
    if (!result) throw new Error('the demo has a week ahead');
    const gaps = weekGaps(result, week.now, result.days[7].to).reverse();
    const gap = gaps.find(
      ({ areaId, need }) => need.staffedMost + need.bedsToAdd + areaOf(areaId).bedStep <= areaOf(areaId).spaces,
    );
    if (!gap) throw new Error('no gap of the demo can be closed with the bed spaces that exist');
    const area = areaOf(gap.areaId);
    const local = makeZone(facts.timeZone).toLocal(gap.shift.from);
    const day = new Date(local * 1000).toLocaleDateString('en-GB', {
      weekday: 'short',
      day: 'numeric',
      month: 'short',
      timeZone: 'UTC',
    });
    const row = () =>
      table
        .getByRole('row')
        .filter({ hasText: `${day.replace(',', '')} ${gap.shift.name}` })
        .filter({ hasText: area.name });
    await row()
      .getByText(`+${String(gap.need.bedsToAdd)}`, { exact: true })
      .waitFor();

    // Staffed beds: by keyboard to the cell; a figure that cannot be is named; the right one is pasted and saved.
    await page.getByRole('link', { name: 'Staffed-bed plan' }).click();
    const shifts = [...facts.shifts].sort((a, b) => a.startMinute - b.startMinute).map(({ name }) => name);
    const down = facts.areas.indexOf(area) * shifts.length + shifts.indexOf(gap.shift.name);
    const right = isoWeekday(local) - 1;
    await page.locator('[data-cell="0.0"]').focus();
    for (let i = 0; i < down; i += 1) await page.keyboard.press('ArrowDown');
    for (let i = 0; i < right; i += 1) await page.keyboard.press('ArrowRight');
    await page.keyboard.type('500');
    await page.keyboard.press('Enter');
    await page
      .getByText(`500 is beyond the ${String(area.spaces)} bed spaces that exist.`)
      .first()
      .waitFor();
    const save = page.getByRole('button', { name: 'Save as version 2' });
    expect(await save.isDisabled()).toBe(true);
    const figure = gap.need.staffedMost + gap.need.bedsToAdd + area.bedStep;
    const place = `${String(down)}.${String(right)}`;
    await page.locator(`[data-cell="${place}"]`).click();
    await page.evaluate(`(() => {
      const clipboardData = new DataTransfer();
      clipboardData.setData('text/plain', '${String(figure)}');
      const paste = new ClipboardEvent('paste', { clipboardData, bubbles: true, cancelable: true });
      document.querySelector('[data-cell="${place}"]').dispatchEvent(paste);
    })()`);
    await page.getByText('Not saved yet: 1 change').waitFor();
    await page.getByLabel('Reason', { exact: true }).first().fill('The week ahead asks for it');
    await save.click();
    await page.getByRole('heading', { name: /^Not saved yet/ }).waitFor({ state: 'detached' });

    // The next week ahead stands on it, and the gap is gone.
    const { week: then } = await weekOnVersion(page, demo.url, 2);
    const left = then.outlook ? weekGaps(then.outlook.result, then.now) : [];
    expect(left.filter(({ areaId, shift }) => areaId === area.id && shift.from === gap.shift.from)).toEqual([]);
    await page.goto(`${demo.url}${site}/week`);
    await page.getByText('Plan version 2').waitFor();
    await page.getByRole('heading', { name: 'Waits for a bed space' }).waitFor();
    expect(await row().count()).toBe(0);

    // What if: a drag by the arrow keys is answered at once.
    await page.getByRole('link', { name: 'Try a plan' }).click();
    await page.getByRole('heading', { name: 'Side by side' }).waitFor();
    await page.getByRole('button', { name: 'Add it' }).click();
    const headline = () => page.getByRole('heading', { level: 1 }).innerText();
    const slider = page.getByLabel('Beds more (+) or fewer (−)', { exact: true });
    await slider.focus();
    await slider.press('ArrowRight');
    await slider.press('ArrowRight');
    expect(await headline()).toMatch(/^With this plan the worst hour/);
    await page.getByText(/^Answered in \d+ ms by the exact method/).waitFor();

    // Saved and confirmed in the background, then adopted for every week with a reason.
    await page.getByLabel('Name of the plan').fill('More beds in the worst shift');
    await page.getByRole('button', { name: 'Save and confirm' }).click();
    const adopt = page.getByRole('button', { name: 'Adopt these beds' });
    await adopt.waitFor({ timeout: patience });
    await page.getByText(/pairs of weeks, each once as it is and once with the plan/).waitFor();
    await page.getByRole('table', { name: /^Patients who wait longer than 240 minutes for a bed space/ }).waitFor();
    await page.getByLabel('Every week from now on, as a new version of the weekly plan').check();
    await page.getByText(/^It was tried on the coming seven days alone/).waitFor();
    await adopt.click();
    await page.getByText('Say why, in at least 3 characters.').waitFor();
    await page.getByLabel('Reason').fill('Agreed at the bed meeting');
    await adopt.click();
    await page.getByText(/^Its beds stand in the weekly plan, version 3/).waitFor();

    // A calendar program reads the feed at its secret address.
    await page.getByLabel('Which calendar will read it').fill('Bed meeting calendar');
    await page.getByRole('button', { name: 'Make an address' }).click();
    const address = await page.getByLabel('Address to subscribe to').inputValue();
    const reply = await fetch(address);
    expect(reply.headers.get('content-type')).toBe('text/calendar; charset=utf-8');
    const calendar = new ICAL.Component(ICAL.parse(await reply.text()) as unknown[]);
    const events = calendar.getAllSubcomponents('vevent').map((one) => new ICAL.Event(one));
    expect(events.length).toBeGreaterThan(0);
    for (const { description } of events) expect(description).toContain('Planning aid.');
    await page.getByRole('button', { name: 'I have kept it' }).click();
    await page.getByRole('button', { name: 'Revoke “Bed meeting calendar”' }).click();
    await page.getByRole('button', { name: 'Revoke the address' }).click();
    await page.getByText(/^Revoked /).waitFor();
    expect((await fetch(address)).status).toBe(404);

    expect(noise).toEqual([]);
  }, 600_000);
});
