import { AxeBuilder } from '@axe-core/playwright';
import type { Page, Response } from 'playwright-core';

/** The rules of WCAG 2.0, 2.1 and 2.2, levels A and AA. */
const wcagTags = ['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa', 'wcag22a', 'wcag22aa'];

/** Adds up layout shifts from the first paint on; goes into the page before its own scripts. */
export const shiftCounter = `
  window.layoutShift = 0;
  new PerformanceObserver((list) => {
    for (const entry of list.getEntries()) if (!entry.hadRecentInput) window.layoutShift += entry.value;
  }).observe({ type: 'layout-shift', buffered: true });
`;

/** Keeps the slowest interaction, press to next paint; goes into the page before its own scripts. */
export const interactionCounter = `
  window.slowest = { name: '', duration: 0 };
  new PerformanceObserver((list) => {
    for (const entry of list.getEntries()) {
      if (entry.interactionId && entry.duration > window.slowest.duration) {
        const at = entry.target;
        const what = at ? at.tagName.toLowerCase() + ' ' + (at.getAttribute('aria-label') ?? at.textContent ?? '').trim().slice(0, 40) : '';
        window.slowest = { name: entry.name + ' on ' + what, duration: entry.duration };
      }
    }
  }).observe({ type: 'event', durationThreshold: 16, buffered: true });
`;

/** The slowest interaction so far: what it was, and its milliseconds to the next paint. */
export function worstInteraction(page: Page): Promise<{ name: string; duration: number }> {
  return page.evaluate<{ name: string; duration: number }>('window.slowest');
}

/** The page's own failings against WCAG 2.2 AA, one line each. */
export async function axeFindings(page: Page): Promise<string[]> {
  const { violations } = await new AxeBuilder({ page }).withTags(wcagTags).analyze();
  return violations.flatMap(({ id, help, nodes }) => {
    const where = nodes.slice(0, 3).map(({ target }) => target.flat().join(' '));
    const more = nodes.length > where.length ? ` and ${String(nodes.length - where.length)} more` : '';
    return [`${id}: ${help} (${where.join('; ')}${more})`];
  });
}

/** Sum of all layout shifts since the page was opened; at least the published cumulative layout shift. */
export function layoutShift(page: Page): Promise<number> {
  return page.evaluate<number>('window.layoutShift');
}

/**
 * What sticks out sideways at the present width, outside of parts that scroll within themselves (a table, a drawing:
 * WCAG 1.4.10 leaves those out). Asked element by element, since the body clips what would make it scroll.
 */
export function sidewaysOverflow(page: Page): Promise<string[]> {
  return page.evaluate<string[]>(`(() => {
    const room = document.documentElement.clientWidth;
    const within = (element) => {
      for (let up = element.parentElement; up && up !== document.body; up = up.parentElement) {
        if (getComputedStyle(up).overflowX !== 'visible') return true;
      }
      return false;
    };
    const out = [];
    for (const element of document.body.querySelectorAll('*')) {
      const box = element.getBoundingClientRect();
      if (box.width <= 1 || box.height <= 1 || box.right <= room + 1 || within(element)) continue;
      if (getComputedStyle(element).visibility === 'hidden') continue;
      const name = element.id ? '#' + element.id : String(element.className.baseVal ?? element.className).slice(0, 60);
      out.push(element.tagName.toLowerCase() + ' ' + name + ' to ' + Math.round(box.right) + ' of ' + room + ' px');
    }
    return out.slice(0, 3);
  })()`);
}

/** Counts the scripts of one page load, bytes as the server sends them. */
export function scriptMeter(page: Page): () => Promise<number> {
  const scripts: Response[] = [];
  page.on('response', (response) => {
    if (response.request().resourceType() === 'script') scripts.push(response);
  });
  return async () => {
    let bytes = 0;
    for (const script of scripts) bytes += (await script.request().sizes()).responseBodySize;
    return bytes;
  };
}
