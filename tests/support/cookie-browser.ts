/** A page as a browser without scripts ends up at it. */
export interface Page {
  url: URL;
  status: number;
  html: string;
  /** Where the last answer points to, if it was not followed. */
  location: string | null;
}

/** A browser without scripts: keeps each origin's cookies by path, follows redirects while `follow` says so. */
export class CookieBrowser {
  private readonly jars = new Map<string, Map<string, { value: string; path: string }>>();

  /** The cookies that it would send, as a header. */
  cookieFor(url: URL): string {
    return [...(this.jars.get(url.origin) ?? [])]
      .filter(([, { path }]) => url.pathname.startsWith(path))
      .map(([name, { value }]) => `${name}=${value}`)
      .join('; ');
  }

  /** Puts a cookie there as if it had been planted. */
  plant(url: URL, cookie: string): void {
    this.keep(url, `${cookie}; path=/`);
  }

  async open(
    address: string | URL,
    { form, follow = () => true }: { form?: Record<string, string>; follow?: (next: URL) => boolean } = {},
  ): Promise<Page> {
    let url = new URL(address);
    let body = form && new URLSearchParams(form);
    for (let hop = 0; hop < 15; hop += 1) {
      const reply = await fetch(url, {
        redirect: 'manual',
        method: body ? 'POST' : 'GET',
        body,
        headers: { cookie: this.cookieFor(url), connection: 'close' },
      });
      for (const line of reply.headers.getSetCookie()) this.keep(url, line);
      const html = await reply.text();
      const location = reply.headers.get('location');
      const next = location === null ? null : new URL(location, url);
      if (next === null || !follow(next)) return { url, status: reply.status, html, location };
      url = next;
      body = undefined;
    }
    throw new Error('redirects without end');
  }

  /** Fills the first form of a page and sends it. */
  async submit(page: Page, fields: Record<string, string>, follow?: (next: URL) => boolean): Promise<Page> {
    const action = /<form[^>]*action="([^"]+)"/.exec(page.html)?.[1];
    if (action === undefined) throw new Error(`no form at ${page.url.href}: ${page.html.slice(0, 300)}`);
    const form: Record<string, string> = {};
    for (const [input] of page.html.matchAll(/<input[^>]*>/g)) {
      const name = /name="([^"]+)"/.exec(input)?.[1];
      if (name !== undefined) form[name] = /value="([^"]*)"/.exec(input)?.[1] ?? '';
    }
    const target = new URL(action.replaceAll('&amp;', '&'), page.url);
    return this.open(target, { form: { ...form, ...fields }, ...(follow ? { follow } : {}) });
  }

  private keep(url: URL, line: string): void {
    const [pair, ...attributes] = line.split(/;\s*/);
    const at = pair.indexOf('=');
    const path = attributes.find((attribute) => /^path=/i.test(attribute))?.slice(5) ?? '/';
    const jar = this.jars.get(url.origin) ?? new Map<string, { value: string; path: string }>();
    this.jars.set(url.origin, jar);
    if (pair.slice(at + 1) === '') jar.delete(pair.slice(0, at));
    else jar.set(pair.slice(0, at), { value: pair.slice(at + 1), path });
  }
}
