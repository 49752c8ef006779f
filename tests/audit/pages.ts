import type { Page } from 'playwright-core';

const site = '/sites/farrowmere-general';

/** One page of the product, looked at as the person it is for. */
export interface AuditedPage {
  name: string;
  /** Account of the demo; null: nobody is signed in. */
  username: string | null;
  path: string;
  /** What has to stand on the page before it counts as loaded. */
  ready: string;
  /** Follows the page's first link to an address like this, where an id is not known beforehand. */
  follow?: RegExp;
  /** Brings the page into the state that is looked at. */
  prepare?: (page: Page) => Promise<void>;
}

/** Every page, with the states that have a look of their own. */
export const auditedPages: readonly AuditedPage[] = [
  { name: 'sign-in', username: null, path: '/sign-in', ready: 'a[href^="/auth/sign-in"]' },
  { name: 'sign-in-refused', username: null, path: '/sign-in?problem=refused', ready: 'a[href^="/auth/sign-in"]' },
  { name: 'no-role', username: 'nobody', path: '/', ready: 'h1' },
  { name: 'administrator', username: 'admin', path: '/', ready: 'h1' },
  { name: 'tonight-charge', username: 'charge', path: `${site}/tonight`, ready: '.night-board' },
  {
    name: 'tonight-census-typed',
    username: 'charge',
    path: `${site}/tonight`,
    ready: '.night-board',
    prepare: async (page) => {
      await page.getByLabel('Acute, present').first().fill('41');
    },
  },
  { name: 'tonight-executive', username: 'executive', path: `${site}/tonight`, ready: '.night-board' },
  { name: 'tonight-other-site', username: 'charge2', path: '/sites/saltby-bay/tonight', ready: '.night-board' },
  { name: 'handover', username: 'charge', path: `${site}/handover`, ready: 'main h1' },
  { name: 'staffed-beds', username: 'operations', path: `${site}/beds`, ready: '[role=grid]' },
  {
    name: 'staffed-beds-edited',
    username: 'operations',
    path: `${site}/beds?halfHours=farrowmere-general-acute`,
    ready: '[role=grid]',
    prepare: async (page) => {
      await page.locator('[data-cell="3.0"]').first().click();
      await page.keyboard.type('19');
      await page.keyboard.press('Enter');
      await page.getByRole('button', { name: 'Discard all changes' }).waitFor();
    },
  },
  { name: 'staffed-beds-executive', username: 'executive', path: `${site}/beds`, ready: '[role=grid]' },
  { name: 'settings', username: 'operations', path: `${site}/settings`, ready: '#history table' },
  { name: 'settings-charge', username: 'charge', path: `${site}/settings`, ready: '#calendar table' },
  { name: 'logs', username: 'steward', path: `${site}/logs`, ready: 'main table:visible' },
  {
    name: 'log',
    username: 'steward',
    path: `${site}/logs`,
    follow: /\/logs\/(?!new)[^/]+$/,
    ready: 'main dl, main table',
  },
  { name: 'load-a-log', username: 'steward', path: `${site}/logs/new`, ready: 'input[type=file]' },
  { name: 'log-guide', username: 'steward', path: `${site}/logs/guide`, ready: 'main table' },
  { name: 'models', username: 'operations', path: `${site}/models`, ready: 'main table:visible' },
  { name: 'model', username: 'operations', path: `${site}/models`, follow: /\/models\/[^/]+$/, ready: 'main h2' },
  {
    name: 'model-opened',
    username: 'operations',
    path: `${site}/models`,
    follow: /\/models\/[^/]+$/,
    ready: 'main h2',
    prepare: async (page) => {
      for (const summary of await page.locator('summary').all()) await summary.click();
    },
  },
  {
    name: 'what-if',
    username: 'operations',
    path: `${site}/what-if`,
    ready: '#side-by-side',
    prepare: async (page) => {
      await page.getByRole('button', { name: 'Add it' }).click();
    },
  },
  { name: 'week-ahead', username: 'operations', path: `${site}/week`, ready: 'main table:visible' },
  { name: 'track-record', username: 'executive', path: `${site}/track-record`, ready: 'main h1' },
  { name: 'briefs', username: 'operations', path: `${site}/briefs`, ready: 'main h1' },
  { name: 'briefs-executive', username: 'executive', path: `${site}/briefs`, ready: 'main h1' },
  { name: 'brief', username: 'executive', path: `${site}/briefs`, follow: /\/briefs\/[^/]+$/, ready: 'main iframe' },
  { name: 'tokens', username: 'steward', path: `${site}/tokens`, ready: 'main h1' },
  { name: 'audit-trail-site', username: 'operations', path: `${site}/audit`, ready: 'main table:visible' },
  { name: 'audit-trail', username: 'admin', path: '/audit', ready: 'main table:visible' },
  { name: 'people', username: 'admin', path: '/people', ready: 'main table:visible' },
  { name: 'person', username: 'admin', path: '/people', follow: /\/people\/[^/]+$/, ready: 'main h1' },
  { name: 'sites', username: 'admin', path: '/installation/sites', ready: 'main h1' },
  { name: 'new-site', username: 'admin', path: '/installation/sites/new', ready: 'form' },
  {
    name: 'site',
    username: 'admin',
    path: '/installation/sites',
    follow: /\/installation\/sites\/(?!new)[^/]+$/,
    ready: 'main h1',
  },
  { name: 'tokens-administrator', username: 'admin', path: '/tokens', ready: 'main h1' },
  { name: 'status', username: 'admin', path: '/status', ready: 'main h2' },
  { name: 'how', username: 'charge', path: '/how', ready: '#sources' },
  {
    name: 'shortcuts',
    username: 'charge',
    path: '/how',
    ready: '#sources',
    prepare: async (page) => {
      await page.keyboard.press('?');
      await page.locator('dialog[open]').waitFor();
    },
  },
  { name: 'not-found', username: 'charge', path: '/nowhere', ready: 'h1' },
];
