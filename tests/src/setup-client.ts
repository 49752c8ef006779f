import '@testing-library/jest-dom/vitest';
import { cleanup } from '@testing-library/react';
import { afterEach } from 'vitest';

afterEach(cleanup);

// jsdom has neither; the pages ask for them.
class NoResizeObserver implements ResizeObserver {
  observe(): void {}
  unobserve(): void {}
  disconnect(): void {}
}
globalThis.ResizeObserver ??= NoResizeObserver;
globalThis.matchMedia ??= (query: string) =>
  Object.assign(new EventTarget(), { matches: false, media: query, onchange: null }) as MediaQueryList;
