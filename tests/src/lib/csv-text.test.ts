import Papa from 'papaparse';
import { describe, expect, it } from 'vitest';
import { csvText } from '../../../src/lib/csv-text.ts';

describe('csvText', () => {
  it('is read back by a CSV parser, with its head as comments', () => {
    const rows = [
      ['Night, "long"', 3, -2.5],
      ['two\nlines', null, 0],
    ];
    const text = csvText(['Cautions\nin one line', 'second'], ['name', 'a', 'b'], rows);
    expect(text.split('\r\n').slice(0, 3)).toEqual(['# Cautions in one line', '# second', 'name,a,b']);
    expect(Papa.parse(text, { comments: '#', skipEmptyLines: true }).data).toEqual([
      ['name', 'a', 'b'],
      ['Night, "long"', '3', '-2.5'],
      ['two\nlines', '', '0'],
    ]);
  });

  it('gives a spreadsheet no formula to run, and leaves negative numbers as they are', () => {
    expect(csvText([], ['=cmd()'], [['@SUM(A1)', '+1', '-x', -4]])).toBe("'=cmd()\r\n'@SUM(A1),'+1,'-x,-4\r\n");
  });
});
