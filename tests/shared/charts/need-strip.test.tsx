import { renderToStaticMarkup } from 'react-dom/server';
import { describe, expect, it } from 'vitest';
import { NeedStrip } from '../../../shared/charts/NeedStrip.tsx';
import type { NeedColumn } from '../../../shared/charts/need-columns.ts';
import { Ribbon } from '../../../shared/charts/Ribbon.tsx';

const past = (at: number, present: number | null): NeedColumn => ({
  kind: 'past',
  at: at * 3600,
  present,
  staffed: 24,
});
const ahead = (at: number, p95: number): NeedColumn => ({
  kind: 'forecast',
  at: at * 3600,
  staffed: 20,
  p5: 10,
  p25: 14,
  p50: 16,
  p75: 18,
  p90: p95 - 1,
  p95,
});
const columns = [past(0, 18), past(1, null), ahead(2, 19), ahead(3, 26)];
const draw = (change: Partial<Parameters<typeof NeedStrip>[0]> = {}) =>
  renderToStaticMarkup(
    <NeedStrip
      id="acute"
      columns={columns}
      staffed={[
        { at: 0, beds: 24 },
        { at: 2.5 * 3600, beds: 20 },
      ]}
      columnWidth={40}
      height={100}
      counted
      {...change}
    />,
  );

describe('NeedStrip', () => {
  it('draws without a browser and hides itself from screen readers', () => {
    expect(draw()).toMatch(/^<svg [^>]*aria-hidden="true"/);
  });
  it('hatches what passes the line and nothing else', () => {
    expect(draw().match(/fill="url\(#acute-hatch\)"/g)).toHaveLength(1);
    expect(draw({ columns: columns.slice(0, 3) })).not.toContain('url(#acute-hatch)"/');
  });
  it('steps the staffed line at its true time, not at the full hour', () => {
    expect(draw()).toMatch(/d="M0 [\d.]+H100V[\d.]+H160"/);
    expect(draw()).toContain('20 staffed');
  });
  it('leaves an hour of which nothing is known open at its top', () => {
    expect(draw()).toMatch(/<path d="M40\.5 [^"]*" fill="none" stroke="var\(--edge\)"/);
  });
  it('is an outline without sand or ember where the area was not counted', () => {
    const outline = draw({ counted: false, columns: columns.slice(2) });
    expect(outline).not.toMatch(/fill="var\(--[gs]\d\)"/);
    expect(outline).toContain('stroke-dasharray="3 3"');
  });

  it('lays what then happened over an earlier forecast, and names it where there is room', () => {
    const known = columns.map((column) => (column.kind === 'forecast' ? { ...column, actual: 22 } : column));
    expect(draw({ columns: known, tall: true })).toContain('22 were there');
    expect(draw({ columns: known })).not.toContain('were there');
    expect(draw({ tall: true })).not.toContain('were there');
  });

  it('says "not counted" within a run of hours that has room for it, and not in a single one', () => {
    const two = [past(0, null), past(1, null), ...columns.slice(2)];
    expect(draw({ columns: two }).match(/not counted/g)).toHaveLength(1);
    expect(draw()).not.toContain('not counted');
  });
});

describe('Ribbon', () => {
  it('lays each shift on the other strand and names the overlap as the handover', () => {
    const markup = renderToStaticMarkup(
      <Ribbon
        id="r"
        columnWidth={40}
        hours={[19, 20, 21, 22, 23].map((hour) => ({ at: hour * 3600, label: String(hour), sky: 4, day: null }))}
        shifts={[
          { name: 'Late', from: 14 * 3600, to: 21.5 * 3600 },
          { name: 'Night', from: 21 * 3600, to: 31.5 * 3600 },
        ]}
        timeOf={(at) => `${String(Math.floor(at / 3600))}:00`}
      />,
    );
    expect(markup).toContain('Handover');
    expect(markup).toContain('<rect x="80" y="51" width="20" height="39" fill="url(#r-splice)"');
    expect(markup).toContain('aria-hidden="true"');
  });
});
