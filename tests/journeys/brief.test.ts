import { existsSync } from 'node:fs';
import type { Browser } from 'playwright-core';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { openBrowser, openPage, signIn, startBuiltDemo, type RunningDemo } from '../support/journey.ts';

interface ListedMail {
  id: number;
  subject: string;
  recipients: string[];
  text: string | null;
  headers: { name: string; value: string }[];
}

let demo: RunningDemo;
let browser: Browser;

beforeAll(async () => {
  expect(existsSync('dist/client/index.html'), 'the client is built before the tests (npm test does it)').toBe(true);
  demo = await startBuiltDemo();
  browser = await openBrowser();
});
afterAll(async () => {
  await browser.close();
  await demo.stop();
});

it('schedules, sends, reads and unsubscribes, in a real browser on the built demo', async () => {
  const { url } = demo;
  // The mailbox page listens three ports above the product.
  const mailbox = `http://127.0.0.1:${String(Number(new URL(url).port) + 3)}`;
  await walkBrief(browser, url, mailbox);
});

async function walkBrief(browser: Browser, url: string, mailbox: string): Promise<void> {
  const outside = `board-${String(Date.now())}@trust.example`;
  const mailTo = async (address: string, subject: RegExp): Promise<ListedMail> => {
    for (let look = 0; look < 240; look += 1) {
      const mails = (await (await fetch(`${mailbox}/messages.json`)).json()) as ListedMail[];
      const found = mails.find((mail) => mail.recipients.includes(address) && subject.test(mail.subject));
      if (found) return found;
      await new Promise((resolve) => setTimeout(resolve, 250));
    }
    throw new Error(`no mail to ${address} like ${String(subject)}`);
  };

  // An operations manager sets when the brief goes out, and asks an outside address.
  const operations = await openPage(browser);
  const { page } = operations;
  await signIn(page, url, 'operations', '/sites/saltby-bay/briefs');
  await page.getByLabel('Goes out by itself').selectOption('yes');
  await page.getByLabel('Day').selectOption('Thursday');
  await page.getByLabel('Hour').fill('06:45');
  await page.getByLabel('Before it is sent').selectOption('approve');
  await page.getByRole('button', { name: 'Save the schedule' }).click();
  await page.getByText(/The next brief is due .*, 06:45/).waitFor();
  await page.getByLabel('Name').fill('Board office');
  await page.getByLabel('E-mail address').fill(outside);
  await page.getByRole('button', { name: 'Ask the address' }).click();
  await page
    .getByRole('row', { name: new RegExp(outside) })
    .getByText('not confirmed yet')
    .waitFor();

  // The address confirms: its link shows a page first, and a press does it, without a sign-in.
  const question = await mailTo(outside, /do you want it/);
  const reader = await openPage(browser, { viewport: { width: 390, height: 844 } });
  await reader.page.goto(/http\S+\/mail\/confirm\/\S+/.exec(question.text ?? '')?.[0] ?? '');
  await reader.page.getByRole('button', { name: 'Yes, send it to me' }).click();
  await reader.page.getByRole('heading', { name: 'Confirmed' }).waitFor();

  // So does one that the mail server will find no mailbox for.
  const nowhere = `bounce-${String(Date.now())}@trust.example`;
  await page.getByLabel('Name').fill('Former board office');
  await page.getByLabel('E-mail address').fill(nowhere);
  await page.getByRole('button', { name: 'Ask the address' }).click();
  const second = await mailTo(nowhere, /do you want it/);
  await reader.page.goto(/http\S+\/mail\/confirm\/\S+/.exec(second.text ?? '')?.[0] ?? '');
  await reader.page.getByRole('button', { name: 'Yes, send it to me' }).click();
  await reader.page.getByRole('heading', { name: 'Confirmed' }).waitFor();

  // A draft is composed, looked at as a mail program shows it, approved and sent.
  await page.getByRole('button', { name: 'Compose a draft now' }).click();
  await page.waitForURL(/\/briefs\/[\w-]+$/);
  const frame = page.frameLocator('iframe');
  await frame.getByRole('heading', { name: 'Last week in hindsight' }).waitFor();
  await frame.getByRole('img', { name: /^Arrivals by day/ }).waitFor();
  await page.getByRole('button', { name: 'Approve and send' }).click();
  await page.getByRole('dialog').getByRole('button', { name: 'Approve and send' }).click();
  await page.getByText(/Sent to \d recipients?/).waitFor({ timeout: 60_000 });
  await page
    .getByRole('row', { name: new RegExp(outside) })
    .getByText('Sent,')
    .waitFor();

  // What comes back stands beside its recipient, and stops what is sent there.
  const returned = page.getByRole('row', { name: new RegExp(nowhere) });
  await returned.getByText('Sent,').waitFor();
  await expect
    .poll(
      async () => {
        await page.reload();
        await returned.getByText('Sent,').waitFor();
        return returned.innerText();
      },
      { timeout: 30_000 },
    )
    .toMatch(/Came back, .*Returned: 5\.1\.1: 550/s);

  // The mail: readable on a phone, nothing wider than it, pictures in place.
  const sent = await mailTo(outside, /weekly brief: /);
  await reader.page.goto(`${mailbox}/messages/${String(sent.id)}/html`);
  await reader.page.getByRole('link', { name: 'Open the week ahead' }).waitFor();
  for (const width of [320, 390]) {
    await reader.page.setViewportSize({ width, height: 844 });
    expect(await reader.page.evaluate('document.documentElement.scrollWidth')).toBe(width);
  }
  const drawn = await reader.page.evaluate('[...document.images].every((image) => image.naturalWidth > 0)');
  expect(drawn).toBe(true);

  // An executive reads it in the archive, on a phone.
  const executive = await openPage(browser, { viewport: { width: 390, height: 844 } });
  await signIn(executive.page, url, 'executive', '/sites/saltby-bay/briefs');
  await executive.page.getByRole('link', { name: 'Read the newest brief' }).click();
  await executive.page.frameLocator('iframe').getByRole('heading', { name: 'Last week in hindsight' }).waitFor();
  expect(await executive.page.evaluate('document.documentElement.scrollWidth')).toBe(390);
  expect(await executive.page.getByRole('button', { name: 'Approve and send' }).count()).toBe(0);

  // One press in the mail ends it.
  const unsubscribe = sent.headers.find(({ name }) => name.toLowerCase() === 'list-unsubscribe')?.value.slice(1, -1);
  await reader.page.goto(unsubscribe ?? '');
  await reader.page.getByText('Nothing has changed yet').waitFor();
  await reader.page.getByRole('button', { name: 'Unsubscribe' }).click();
  await reader.page.getByRole('heading', { name: 'Unsubscribed' }).waitFor();
  await page.getByRole('link', { name: 'All briefs' }).click();
  await page
    .getByRole('row', { name: new RegExp(outside) })
    .getByText('Unsubscribed')
    .waitFor();
  await page.getByText('Mail to it came back').waitFor();
  await page.getByRole('button', { name: 'The address of Former board office is right: send to it again' }).click();
  await page.getByText('Mail to it came back').waitFor({ state: 'detached' });
  expect([...operations.noise, ...executive.noise]).toEqual([]);
}
