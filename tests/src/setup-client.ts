import '@testing-library/jest-dom/vitest';
import { cleanup } from '@testing-library/react';
import { afterEach } from 'vitest';

afterEach(cleanup);

// jsdom has none of them; the pages ask for them.
const missing = {
  scrollIntoView: () => undefined,
  hasPointerCapture: () => false,
  setPointerCapture: () => undefined,
  releasePointerCapture: () => undefined,
};
for (const [name, value] of Object.entries(missing)) {
  // Tests of workers run without a document.
  if (typeof Element !== 'undefined' && !(name in Element.prototype))
    Object.defineProperty(Element.prototype, name, { value, writable: true });
}
class NoResizeObserver implements ResizeObserver {
  observe(): void {}
  unobserve(): void {}
  disconnect(): void {}
}
globalThis.ResizeObserver ??= NoResizeObserver;
globalThis.matchMedia ??= (query: string) =>
  Object.assign(new EventTarget(), { matches: false, media: query, onchange: null }) as MediaQueryList;
