import type { DemoAccount } from './farrowmere-accounts.ts';
import { escapeHtml, renderPage } from './page-shell.ts';

const band = 'Stand-in hospital sign-in (demo)';

/** The sign-in form: two fields and a button, no script needed; below it the accounts of the demo. */
export function signInPage(page: {
  action: string;
  accounts: readonly DemoAccount[];
  password: string;
  username: string;
  problem: string | null;
}): string {
  const rows = page.accounts
    .map(
      ({ username, name, does }) =>
        `<tr><td><code>${escapeHtml(username)}</code></td><td>${escapeHtml(name)}<br><span class="quiet">${escapeHtml(does)}</span></td></tr>`,
    )
    .join('');
  const problem =
    page.problem === null ? '' : `<p class="problem" id="problem" role="alert">${escapeHtml(page.problem)}</p>`;
  const described = page.problem === null ? '' : ' aria-invalid="true" aria-describedby="problem"';
  return renderPage({
    title: 'Sign in · stand-in hospital sign-in',
    band,
    body: `<h1>Sign in</h1>
<p>In a hospital its own sign-in stands here. This one belongs to the demo and knows invented people only.</p>
<form method="post" action="${escapeHtml(page.action)}">${problem}
<label for="username">User name</label>
<input id="username" name="username" autocomplete="username" autocapitalize="none" spellcheck="false" required value="${escapeHtml(page.username)}"${described}${page.username === '' ? ' autofocus' : ''}>
<label for="password">Password</label>
<input id="password" name="password" type="password" autocomplete="current-password" required${described}${page.username === '' ? '' : ' autofocus'}>
<button type="submit">Sign in</button></form>
<h2>Accounts of the demo</h2>
<p>The password of each is <code>${escapeHtml(page.password)}</code>.</p>
<table><thead><tr><th scope="col">User name</th><th scope="col">Who</th></tr></thead><tbody>${rows}</tbody></table>`,
  });
}

/** Submits the sign-out form at once where scripts run; the button is for where they do not. */
export const signOutScript = "document.getElementById('sign-out').click()";

/** Sign-out asked for by the product; `form` is the provider's own, with its anti-forgery value. */
export function signOutPage(form: string): string {
  return renderPage({
    title: 'Sign out · stand-in hospital sign-in',
    band,
    body: `<h1>Sign out</h1><p>You are about to be signed out of the hospital account as well.</p>${form}
<button id="sign-out" type="submit" form="op.logoutForm" name="logout" value="yes">Sign out</button>`,
    script: signOutScript,
  });
}

/** Signed out, with nowhere to go back to. */
export function signedOutPage(): string {
  return renderPage({ title: 'Signed out', band, body: '<h1>Signed out</h1><p>You can close this page.</p>' });
}

/** Something was wrong with the request. */
export function errorPage(problem: string): string {
  return renderPage({
    title: 'Sign-in did not work',
    band,
    body: `<h1>Sign-in did not work</h1><p>${escapeHtml(problem)}</p><p>Go back to the product and start signing in again.</p>`,
  });
}
