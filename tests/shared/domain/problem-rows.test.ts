import { expect, test } from 'vitest';
import { problemRowsCsv, RowNumbers } from '../../../shared/domain/problem-rows.ts';

test('problem rows are told by number, column and kind, in the order of the file', () => {
  const csv = problemRowsCsv([
    { problem: 'wrong number of fields', column: null, rows: new Uint32Array([4]) },
    { problem: 'before arrival', column: 'departure_at', rows: new Uint32Array([2, 9]) },
    { problem: 'before arrival', column: 'bed_space_at', rows: new Uint32Array([2]) },
  ]).join('');
  expect(csv).toBe(
    'row,column,kind\r\n2,departure_at,before arrival\r\n2,bed_space_at,before arrival\r\n4,,wrong number of fields\r\n9,departure_at,before arrival\r\n',
  );
});

test('any number of rows fits, and comes out in pieces', () => {
  const numbers = new RowNumbers();
  for (let row = 3_000_000; row > 2_980_000; row -= 1) numbers.add(row);
  const pieces = problemRowsCsv([{ problem: 'time unreadable', column: 'arrival_at', rows: numbers.all() }]);
  expect(pieces.length).toBe(5);
  const lines = pieces.join('').trimEnd().split('\r\n');
  expect(lines.length).toBe(20_001);
  expect(lines[1]).toBe('2980001,arrival_at,time unreadable');
  expect(lines.at(-1)).toBe('3000000,arrival_at,time unreadable');
});
