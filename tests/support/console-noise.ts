import { format } from 'node:util';

const heard: string[] = [];

/** Hears console.error and console.warn instead of printing them. */
export function hearConsole(): void {
  for (const method of ['error', 'warn'] as const) {
    console[method] = (...parts: unknown[]) => {
      heard.push(`console.${method}: ${format(...parts)}`);
    };
  }
}

/** What was heard since the last call, and forgets it. */
export function takeNoise(): string[] {
  return heard.splice(0);
}
