import { render, screen, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { describe, expect, it } from 'vitest';
import { Button } from '../../../src/components/Button.tsx';
import { ChanceFigure } from '../../../src/components/ChanceFigure.tsx';
import { compareValues, hasOrderOfItsOwn } from '../../../src/components/compare-values.ts';
import { DataTable } from '../../../src/components/DataTable.tsx';
import { nodeText } from '../../../src/components/node-text.ts';
import { arrangeRows, type Column } from '../../../src/components/use-table-view.ts';

interface Row {
  area: string;
  beds: number | null;
}

const columns: Column<Row>[] = [
  { key: 'area', header: 'Area', cell: ({ area }) => area, rowHeader: true, value: ({ area }) => area },
  { key: 'beds', header: 'Beds', cell: ({ beds }) => beds ?? '–', figure: true, value: ({ beds }) => beds },
];
const rows: Row[] = [
  { area: 'Bay 10', beds: 4 },
  { area: 'Bay 2', beds: null },
  { area: 'Acute', beds: 22 },
];
const names = (found: readonly Row[]) => found.map(({ area }) => area);

describe('arranging a table', () => {
  it('sorts numbers as numbers, also within text, and leaves what is missing last either way', () => {
    expect(names(arrangeRows(rows, columns, { key: 'area', descending: false }, ''))).toEqual([
      'Acute',
      'Bay 2',
      'Bay 10',
    ]);
    expect(names(arrangeRows(rows, columns, { key: 'beds', descending: false }, ''))).toEqual([
      'Bay 10',
      'Acute',
      'Bay 2',
    ]);
    expect(names(arrangeRows(rows, columns, { key: 'beds', descending: true }, ''))).toEqual([
      'Acute',
      'Bay 10',
      'Bay 2',
    ]);
    expect(arrangeRows(rows, columns, null, '')).toBe(rows);
  });

  it('finds rows that hold every word', () => {
    expect(names(arrangeRows(rows, columns, null, 'bay 1'))).toEqual(['Bay 10']);
    expect(names(arrangeRows(rows, columns, null, 'BAY'))).toEqual(['Bay 10', 'Bay 2']);
    expect(names(arrangeRows(rows, columns, null, 'ward'))).toEqual([]);
  });
});

describe('order of what is printed', () => {
  const sorted = (values: (string | number | null)[]) => [...values].sort((a, b) => compareValues(a, b, false));

  it('reads numbers, chances, signs and dates as this product prints them', () => {
    expect(sorted(['1,260', '98', '−2', '+3'])).toEqual(['−2', '+3', '98', '1,260']);
    expect(sorted(['12 %', '<1 %', '>99 %', '1 %'])).toEqual(['<1 %', '1 %', '12 %', '>99 %']);
    expect(sorted(['20 Nov 2026', '1 Dec 2026, 07:00', '3 Jan 2027', '1 Dec 2026, 06:30'])).toEqual([
      '20 Nov 2026',
      '1 Dec 2026, 06:30',
      '1 Dec 2026, 07:00',
      '3 Jan 2027',
    ]);
  });

  it('leaves what is missing last either way', () => {
    expect(sorted([null, '2', '–', '1', ''])).toEqual(['1', '2', null, '–', '']);
    expect(['–', '1', '2'].sort((a, b) => compareValues(a, b, true))).toEqual(['2', '1', '–']);
  });

  it('knows days without a year, which no order of letters would sort', () => {
    for (const text of [
      'Wed 2 Dec',
      'Wednesday 2 December',
      '21:00',
      '07:00 Wednesday',
      'Sat 5 Dec, Night',
      'Tuesday',
    ]) {
      expect(hasOrderOfItsOwn(text), text).toBe(true);
    }
    for (const text of [
      '2 Dec 2026',
      'Fri 25 Dec 2026',
      'Acute',
      '12 %',
      '20 Nov 2026, 18:40',
      'Monitoring',
      'Sunderland',
    ]) {
      expect(hasOrderOfItsOwn(text), text).toBe(false);
    }
  });
});

describe('the words of a cell', () => {
  it('leaves out buttons, fields, drawings and what only the eye sees', () => {
    expect(
      nodeText(
        <>
          <b>12</b>
          <div>
            of 20 <svg aria-hidden="true" />
            <span aria-hidden="true">↑</span>
            <span className="sr-only">more than before</span>
          </div>
          <button type="button">Change</button>
          <Button>Remove</Button>
          <input aria-label="beds" />
        </>,
      ),
    ).toBe('12 of 20 more than before');
    expect(nodeText(<ChanceFigure chance={0.123} />)).toBe('12 %');
  });
});

describe('DataTable', () => {
  const order = () =>
    within(screen.getByRole('table'))
      .getAllByRole('rowheader')
      .map((cell) => cell.textContent);

  it('sorts by its headers, says so, and comes back to the order it had', async () => {
    render(<DataTable caption="Areas" columns={columns} rows={rows} rowKey={({ area }) => area} />);
    const header = screen.getByRole('columnheader', { name: 'Beds' });
    expect(header).toHaveAttribute('aria-sort', 'none');
    await userEvent.click(within(header).getByRole('button'));
    expect(header).toHaveAttribute('aria-sort', 'ascending');
    expect(order()).toEqual(['Bay 10', 'Acute', 'Bay 2']);
    await userEvent.click(within(header).getByRole('button'));
    expect(header).toHaveAttribute('aria-sort', 'descending');
    expect(order()).toEqual(['Acute', 'Bay 10', 'Bay 2']);
    await userEvent.click(within(header).getByRole('button'));
    expect(order()).toEqual(['Bay 10', 'Bay 2', 'Acute']);
  });

  it('copies what it shows, without a column that was left out', async () => {
    const user = userEvent.setup();
    render(
      <DataTable
        caption="Areas"
        columns={columns}
        rows={rows}
        rowKey={({ area }) => area}
        file={{ fileName: 'areas.csv', head: ['Planning aid.'] }}
      />,
    );
    await user.click(screen.getByRole('button', { name: 'Copy: Areas' }));
    expect(await navigator.clipboard.readText()).toBe('Area\tBeds\nBay 10\t4\nBay 2\t\nAcute\t22');
    await user.click(screen.getByText('Columns'));
    await user.click(screen.getByRole('checkbox', { name: 'Beds' }));
    expect(screen.queryByRole('columnheader', { name: 'Beds' })).toBeNull();
    await user.click(screen.getByRole('button', { name: 'Copy: Areas' }));
    expect(await navigator.clipboard.readText()).toBe('Area\nBay 10\nBay 2\nAcute');
  });

  it('sorts and saves by the words of its cells where a column gives no value, never by its buttons', async () => {
    const user = userEvent.setup();
    const plain: Column<Row>[] = [
      { key: 'area', header: 'Area', cell: ({ area }) => <b>{area}</b>, rowHeader: true },
      { key: 'beds', header: 'Beds', cell: ({ beds }) => beds ?? '–', figure: true },
      { key: 'do', header: <span className="sr-only">Actions</span>, cell: () => <Button>Change</Button> },
    ];
    const four = [...rows, { area: 'Acute 2', beds: 3 }];
    render(<DataTable caption="Areas" columns={plain} rows={four} rowKey={({ area }) => area} />);
    const header = screen.getByRole('columnheader', { name: 'Beds' });
    await user.click(within(header).getByRole('button'));
    expect(order()).toEqual(['Acute 2', 'Bay 10', 'Acute', 'Bay 2']);
    expect(within(screen.getByRole('columnheader', { name: 'Actions' })).queryByRole('button')).toBeNull();
    await user.click(screen.getByRole('button', { name: 'Copy: Areas' }));
    expect(await navigator.clipboard.readText()).toBe('Area\tBeds\nAcute 2\t3\nBay 10\t4\nAcute\t22\nBay 2\t–');
  });

  it('keeps a few of very many rows in the page', () => {
    const many = Array.from({ length: 5000 }, (_, index) => ({ area: `Area ${String(index)}`, beds: index }));
    render(<DataTable caption="Areas" columns={columns} rows={many} rowKey={({ area }) => area} />);
    expect(screen.getByRole('table')).toHaveAttribute('aria-rowcount', '5001');
    expect(screen.queryAllByRole('rowheader').length).toBeLessThan(100);
  });
});
