import { openBrowser, openPage, signIn } from '../support/journey.ts';
import { servedDemo, servedSite } from './demo-server.ts';
import { summarise, type Figure } from './measure.ts';

const drags = 60;
/** The first few are answered before the browser has compiled the method. */
const warmUp = 10;

/** Moves the slider by one and waits for the frame after the one that shows the answer; ms until then, and ms that the method took. */
const drag = `(async () => {
  const slider = document.querySelector('main input[type=range]');
  const set = Object.getOwnPropertyDescriptor(HTMLInputElement.prototype, 'value').set;
  const next = Number(slider.value) + (Number(slider.value) >= 6 ? -6 : 1);
  const from = performance.now();
  set.call(slider, String(next));
  slider.dispatchEvent(new Event('input', { bubbles: true }));
  await new Promise((done) => requestAnimationFrame(() => requestAnimationFrame(done)));
  const shown = performance.now() - from;
  return [shown, Number(document.querySelector('[data-answered]').getAttribute('data-answered'))];
})()`;

/** A drag of beds on What if in a real browser, the demo's five areas × 168 h: until the method has answered, and until it is shown. */
export async function benchDrag(): Promise<Figure[]> {
  const demo = await servedDemo();
  const browser = await openBrowser();
  try {
    const { page } = await openPage(browser);
    await signIn(page, demo.url, 'operations', `/sites/${servedSite.id}/what-if`);
    await page.getByRole('button', { name: 'Add it' }).click();
    await page.getByText(/^Answered in \d+ ms by the exact method/).waitFor();
    const answered: number[] = [];
    const shown: number[] = [];
    for (let turn = 0; turn < warmUp + drags; turn += 1) {
      const [until, method] = await page.evaluate<[number, number]>(drag);
      if (turn < warmUp) continue;
      shown.push(until);
      answered.push(method);
    }
    return [
      summarise(
        { name: 'What if in the browser: a drag answered, 95th percentile', unit: 'ms', better: 'lower', goal: 32 },
        answered,
        0.95,
      ),
      summarise(
        {
          name: 'What if in the browser: a drag answered and drawn, two frames, 95th percentile',
          unit: 'ms',
          better: 'lower',
        },
        shown,
        0.95,
      ),
    ];
  } finally {
    await browser.close();
  }
}
