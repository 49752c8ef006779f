import { Agent, request } from 'node:http';

/** Somebody signed in to the product through its own sign-in, calling its own API. */
export interface DemoCaller {
  /** The header that carries the session, for a caller elsewhere. */
  cookie(): string;
  get(path: string): Promise<unknown>;
  send(method: 'POST' | 'PUT', path: string, body: unknown): Promise<unknown>;
  /** Sends a body as it is. */
  upload(path: string, contentType: string, body: string): Promise<unknown>;
}

interface Reply {
  status: number;
  headers: Record<string, string | string[] | undefined>;
  text: string;
}

/**
 * Signs an account of the demo in as a browser would: from the product to the stand-in provider, through
 * its form, and back.
 * @param addresses the configured BASE_URL, and where the server listens on this machine
 */
export async function signInToDemo(
  addresses: { baseUrl: string; localUrl: string },
  username: string,
  password: string,
): Promise<DemoCaller> {
  const { baseUrl, localUrl } = addresses;
  const jar = new Map<string, string>();
  const agent = new Agent({ keepAlive: false });

  // BASE_URL may be a proxy's address: what is meant for it goes to the server itself.
  function local(url: URL): URL {
    return url.origin === new URL(baseUrl).origin ? new URL(url.pathname + url.search, localUrl) : url;
  }

  function cookieHeader(): string {
    return [...jar].map(([name, value]) => `${name}=${value}`).join('; ');
  }

  function call(method: string, url: URL, headers: Record<string, string> = {}, body?: string): Promise<Reply> {
    return new Promise((resolve, reject) => {
      const cookie = cookieHeader();
      const sent = request(
        local(url),
        { agent, method, headers: { ...headers, ...(cookie ? { cookie } : {}) } },
        (res) => {
          const chunks: Buffer[] = [];
          res.on('data', (chunk: Buffer) => chunks.push(chunk));
          res.on('error', reject);
          res.on('end', () => {
            for (const line of res.headers['set-cookie'] ?? []) {
              const [pair] = line.split(';');
              const at = pair.indexOf('=');
              const value = pair.slice(at + 1);
              if (value === '') jar.delete(pair.slice(0, at));
              else jar.set(pair.slice(0, at), value);
            }
            resolve({
              status: res.statusCode ?? 0,
              headers: res.headers,
              text: Buffer.concat(chunks).toString('utf8'),
            });
          });
        },
      );
      sent.on('error', reject);
      sent.end(body);
    });
  }

  let url = new URL(`${baseUrl}/auth/sign-in`);
  let reply = await call('GET', url);
  for (
    let hop = 0;
    hop < 12 && (reply.headers.location !== undefined || url.pathname.startsWith('/interaction/'));
    hop += 1
  ) {
    if (reply.headers.location !== undefined) {
      url = new URL(String(reply.headers.location), url);
      if (url.origin === new URL(baseUrl).origin && !url.pathname.startsWith('/auth/')) break;
      reply = await call('GET', url);
    } else {
      const action = /<form[^>]*action="([^"]+)"/.exec(reply.text)?.[1] ?? url.pathname;
      url = new URL(action.replaceAll('&amp;', '&'), url);
      const form = new URLSearchParams({ username, password }).toString();
      reply = await call('POST', url, { 'content-type': 'application/x-www-form-urlencoded' }, form);
    }
  }
  const session = await call('GET', new URL(`${baseUrl}/api/session`));
  const { person, csrfToken } = JSON.parse(session.text) as { person: { id: string } | null; csrfToken: string };
  if (!person) throw new Error(`the demo could not sign in as ${username}`);

  async function checked(
    method: string,
    path: string,
    headers: Record<string, string>,
    body?: string,
  ): Promise<unknown> {
    const answer = await call(method, new URL(`${baseUrl}${path}`), { ...headers, 'x-csrf-token': csrfToken }, body);
    if (answer.status >= 400)
      throw new Error(`${method} ${path} answered ${String(answer.status)}: ${answer.text.slice(0, 2000)}`);
    return answer.text === '' ? null : JSON.parse(answer.text);
  }
  return {
    cookie: cookieHeader,
    get: (path) => checked('GET', path, {}),
    send: (method, path, body) => checked(method, path, { 'content-type': 'application/json' }, JSON.stringify(body)),
    upload: (path, contentType, body) => checked('POST', path, { 'content-type': contentType }, body),
  };
}
