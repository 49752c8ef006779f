/**
 * Lets the product open without its server, once the first page is there. Browsers allow that over TLS and on the
 * machine itself only; elsewhere a reload needs the server.
 */
export function registerServiceWorker(): void {
  if (!import.meta.env.PROD || !('serviceWorker' in navigator)) return;
  window.addEventListener('load', () => {
    // Refused, for instance by a private window: the product works as before.
    navigator.serviceWorker.register('/service-worker.js').catch(() => undefined);
  });
}
