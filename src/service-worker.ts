/// <reference lib="webworker" />
import { addressesOf, partsBehind, withoutNonce } from './lib/kept-parts.ts';

// Opens the product while its server cannot be reached. It keeps the page's frame and the parts of Tonight, never an
// answer of the API: what was read is kept by the page itself, and goes with the session.

declare const self: ServiceWorkerGlobalScope;

const cacheName = 'frame';
const frame = '/';
const keptPages = ['src/pages/TonightPage.tsx', 'src/pages/HandoverPage.tsx'];
/** Addresses that the server answers with something else than the page. */
const notThePage = /^\/(?:api|auth|mail|assets)\/|^\/(?:healthz|readyz|metrics)$|\.[a-z0-9]+$/;
/** A server that takes longer to send the page is treated as one that does not answer. */
const patienceMilliseconds = 4000;

/** Keeps a page's frame with every part that it needs, and drops those of an older version. */
async function keepFrame(reply: Response): Promise<void> {
  if (!reply.ok || !reply.headers.get('content-type')?.startsWith('text/html')) return;
  const cache = await caches.open(cacheName);
  const text = await reply.clone().text();
  const kept = await cache.match(frame);
  if (kept && withoutNonce(await kept.text()) === withoutNonce(text)) return;
  const manifest: unknown = await (await fetch('/parts.json', { cache: 'no-store' })).json();
  const parts = new Set([...addressesOf(text), ...partsBehind(manifest, keptPages)]);
  const there = await cache.keys();
  const thereAddresses = new Set(there.map((request) => new URL(request.url).pathname));
  await cache.addAll([...parts].filter((address) => !thereAddresses.has(address)));
  // Only now is the new version whole.
  await cache.put(frame, reply);
  const old = there.filter(({ url }) => ![frame, ...parts].includes(new URL(url).pathname));
  await Promise.all(old.map((request) => cache.delete(request)));
}

const keptFrame = async () => (await caches.open(cacheName)).match(frame);

async function openPage(event: FetchEvent): Promise<Response> {
  const fresh = fetch(event.request).then(
    (reply) => (reply.status >= 500 ? null : reply),
    () => null,
  );
  const late = new Promise<null>((resolve) => setTimeout(() => resolve(null), patienceMilliseconds));
  const reply = await Promise.race([fresh, late]);
  if (reply) {
    // A frame that cannot be kept now is tried again with the next page.
    event.waitUntil(keepFrame(reply.clone()).catch(() => undefined));
    return reply;
  }
  return (await keptFrame()) ?? (await fresh) ?? Response.error();
}

self.addEventListener('install', (event) => {
  event.waitUntil(fetch(frame, { cache: 'no-store' }).then(keepFrame));
  void self.skipWaiting();
});

self.addEventListener('fetch', (event) => {
  const { request } = event;
  const { origin, pathname } = new URL(request.url);
  if (request.method !== 'GET' || origin !== self.location.origin) return;
  if (request.mode === 'navigate') {
    if (!notThePage.test(pathname)) event.respondWith(openPage(event));
  } else if (pathname.startsWith('/assets/')) {
    event.respondWith(caches.match(request, { ignoreVary: true }).then((kept) => kept ?? fetch(request)));
  }
});
