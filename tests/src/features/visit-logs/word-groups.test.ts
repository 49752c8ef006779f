import { expect, test } from 'vitest';
import { groupWords } from '../../../../src/features/visit-logs/word-groups.ts';

test('spellings that differ in case or spaces only are one word, under the most frequent', () => {
  expect(
    groupWords([
      { value: 'Majors', rows: 9 },
      { value: 'minors', rows: 8 },
      { value: 'MAJORS', rows: 12 },
      { value: 'Fast  Track', rows: 1 },
      { value: 'fast track', rows: 2 },
      { value: 'Fast-Track', rows: 3 },
    ]),
  ).toEqual([
    { spellings: ['MAJORS', 'Majors'], rows: 21 },
    { spellings: ['minors'], rows: 8 },
    { spellings: ['fast track', 'Fast  Track'], rows: 3 },
    { spellings: ['Fast-Track'], rows: 3 },
  ]);
});
