import { expect, test } from 'vitest';
import { takeNoise } from '../support/console-noise.ts';

test('what reaches the console is heard, so that the setup can fail the test', () => {
  console.warn('%d beds', 3);
  console.error('gone');
  expect(takeNoise()).toEqual(['console.warn: 3 beds', 'console.error: gone']);
  expect(takeNoise()).toEqual([]);
});
