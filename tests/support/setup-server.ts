import { afterEach, beforeEach } from 'vitest';
import { hearConsole, takeNoise } from './console-noise.ts';

// The server speaks through its log only: whatever reaches the console is a fault, and fails the test in which it did.
hearConsole();
beforeEach(hearConsole);
afterEach(() => {
  const noise = takeNoise();
  if (noise.length > 0) throw new Error(`A test was noisy on the console:\n${noise.join('\n')}`);
});
