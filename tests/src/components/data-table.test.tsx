import { render, screen, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { describe, expect, it } from 'vitest';
import { DataTable } from '../../../src/components/DataTable.tsx';
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
    await user.click(screen.getByRole('button', { name: 'Copy' }));
    expect(await navigator.clipboard.readText()).toBe('Area\tBeds\nBay 10\t4\nBay 2\t\nAcute\t22');
    await user.click(screen.getByText('Columns'));
    await user.click(screen.getByRole('checkbox', { name: 'Beds' }));
    expect(screen.queryByRole('columnheader', { name: 'Beds' })).toBeNull();
    await user.click(screen.getByRole('button', { name: 'Copy' }));
    expect(await navigator.clipboard.readText()).toBe('Area\nBay 10\nBay 2\nAcute');
  });

  it('keeps a few of very many rows in the page', () => {
    const many = Array.from({ length: 5000 }, (_, index) => ({ area: `Area ${String(index)}`, beds: index }));
    render(<DataTable caption="Areas" columns={columns} rows={many} rowKey={({ area }) => area} />);
    expect(screen.getByRole('table')).toHaveAttribute('aria-rowcount', '5001');
    expect(screen.queryAllByRole('rowheader').length).toBeLessThan(100);
  });
});
