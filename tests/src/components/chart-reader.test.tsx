import { fireEvent, render, screen } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { describe, expect, it } from 'vitest';
import type { NeedColumn } from '../../../shared/charts/need-columns.ts';
import { ChartReader } from '../../../src/components/ChartReader.tsx';
import { ReadNeed } from '../../../src/components/ReadNeed.tsx';

const readings = ['21:00', '22:00', '23:00'].map((name, index) => ({ name, text: `${String(20 + index)} needed` }));

function renderReader() {
  render(
    <ChartReader label="Acute" readings={readings} columnWidth={40} start={10}>
      <svg width={130} height={50} />
    </ChartReader>,
  );
  return screen.getByRole('slider', { name: 'Acute: figures' });
}

describe('reading a drawing', () => {
  it('goes from column to column by keyboard, to the ends, and says each', async () => {
    const user = userEvent.setup();
    const reader = renderReader();
    expect(reader).toHaveAttribute('aria-valuetext', '21:00: 20 needed');
    await user.tab();
    expect(reader).toHaveFocus();
    await user.keyboard('{ArrowRight}');
    expect(reader).toHaveAttribute('aria-valuetext', '22:00: 21 needed');
    expect(screen.getByText('22:00')).toBeVisible();
    await user.keyboard('{End}{ArrowRight}');
    expect(reader).toHaveAttribute('aria-valuetext', '23:00: 22 needed');
    await user.keyboard('{Home}');
    expect(reader).toHaveAttribute('aria-valuenow', '0');
  });

  it('shows the column under the pointer, nothing beside the columns, and puts it away on Escape', async () => {
    const reader = renderReader();
    fireEvent.pointerMove(reader, { clientX: 10 + 40 + 5 });
    expect(screen.getByText('22:00')).toBeVisible();
    fireEvent.pointerMove(reader, { clientX: 5 });
    expect(screen.queryByText('22:00')).toBeNull();
    fireEvent.pointerDown(reader, { clientX: 12 });
    expect(screen.getByText('21:00')).toBeVisible();
    await userEvent.keyboard('{Escape}');
    expect(screen.queryByText('21:00')).toBeNull();
  });

  it('opens the column that is pressed, or read when Enter is', async () => {
    const opened: number[] = [];
    render(
      <ChartReader label="Acute" readings={readings} columnWidth={40} onOpen={(index) => opened.push(index)}>
        <svg />
      </ChartReader>,
    );
    const reader = screen.getByRole('slider');
    fireEvent.pointerMove(reader, { clientX: 85 });
    fireEvent.click(reader);
    expect(opened).toEqual([2]);
    fireEvent.pointerLeave(reader);
    await userEvent.tab();
    await userEvent.keyboard('{Home}{ArrowRight}{Enter}');
    expect(opened).toEqual([2, 1]);
  });

  it('does not let the hours slide while one of them is read', () => {
    let heard = 0;
    render(
      <div onKeyDown={() => (heard += 1)}>
        <ChartReader label="Acute" readings={readings} columnWidth={40}>
          <svg />
        </ChartReader>
      </div>,
    );
    const reader = screen.getByRole('slider');
    fireEvent.keyDown(reader, { key: 'ArrowRight' });
    expect(heard).toBe(0);
    fireEvent.keyDown(reader, { key: 'x' });
    expect(heard).toBe(1);
  });

  it('tells need, its range, P90, and by how many beds P90 is missed', () => {
    const past: NeedColumn = { kind: 'past', at: 0, staffed: 26, present: 24 };
    const ahead: NeedColumn = {
      kind: 'forecast',
      at: 3600,
      staffed: 26,
      p5: 18,
      p25: 22,
      p50: 25,
      p75: 29,
      p90: 32,
      p95: 34,
    };
    render(
      <ReadNeed label="Acute" columns={[past, ahead]} names={['01:00']} timeZone="UTC" columnWidth={40}>
        <svg />
      </ReadNeed>,
    );
    const reader = screen.getByRole('slider');
    expect(reader).toHaveAttribute(
      'aria-valuetext',
      '01:00: need 25, 90\u00a0% range 18 to 34; P90 32; 26 staffed, 6 fewer than P90',
    );
    fireEvent.keyDown(reader, { key: 'ArrowLeft' });
    expect(reader).toHaveAttribute('aria-valuetext', '00:00: 24 present');
  });
});
