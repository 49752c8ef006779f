import { QueryClient, QueryClientProvider } from '@tanstack/react-query';
import { render, screen, within } from '@testing-library/react';
import userEvent from '@testing-library/user-event';
import { useState } from 'react';
import { MemoryRouter } from 'react-router-dom';
import { beforeAll, describe, expect, it, vi } from 'vitest';
import type { Scenario } from '../../../../shared/api/scenarios.ts';
import type { PlanChange } from '../../../../shared/domain/plan-change.ts';
import { makeZone } from '../../../../shared/domain/zoned-time.ts';
import { previewNeed } from '../../../../shared/forecasting/preview-need.ts';
import { readExactWire } from '../../../../shared/forecasting/read-exact-wire.ts';
import { needChangeOf } from '../../../../shared/forecasting/scenario.ts';
import { differencesCsv } from '../../../../src/features/scenarios/differences-csv.ts';
import { newChange, spansOf } from '../../../../src/features/scenarios/new-change.ts';
import { changeInWords } from '../../../../src/features/scenarios/plan-words.ts';
import { previewGap } from '../../../../src/features/scenarios/preview-gap.ts';
import { planFaults, PlanPreviewer } from '../../../../src/features/scenarios/preview-plan.ts';
import { SliderField } from '../../../../src/features/scenarios/SliderField.tsx';
import { WhatIfView } from '../../../../src/features/scenarios/WhatIfView.tsx';
import { buildBasis, zoneName } from './build-basis.ts';

const basis = buildBasis();
const zone = makeZone(zoneName);
const night = spansOf(basis, zone)[0];
const beds = (more: Partial<Extract<PlanChange, { kind: 'beds' }>> = {}): PlanChange => ({
  kind: 'beds',
  areaId: 'acute',
  from: night.from,
  to: night.to,
  beds: 2,
  ...more,
});

describe('PlanPreviewer', () => {
  const previewer = new PlanPreviewer(basis);
  const direct = (changes: PlanChange[]) =>
    previewNeed(readExactWire(basis.exact), needChangeOf(changes, basis.exact)).map(({ shortfall }) => shortfall);

  it('answers a plan of beds and anything else as the exact method does in one go', () => {
    for (const changes of [
      [],
      [beds()],
      [beds(), beds({ beds: -1, areaId: 'resuscitation' })],
      [{ kind: 'demand', areaId: null, percent: 20 } as const, beds()],
      [{ kind: 'closed', areaId: 'resuscitation', from: night.from, to: night.to, toAreaId: 'acute' } as const, beds()],
    ]) {
      expect(previewer.preview(changes).areas.map(({ shortfall }) => shortfall)).toEqual(direct(changes));
    }
  });

  it('keeps the very answer of an area that the plan leaves alone, so that it is not drawn again', () => {
    const asIs = previewer.preview([]);
    const more = previewer.preview([beds()]);
    expect(more.areas[1]).toBe(asIs.areas[1]);
    expect(more.areas[0].worst).toBeLessThanOrEqual(asIs.areas[0].worst);
    expect(more.bedHoursShort).toBeLessThan(asIs.bedHoursShort);
    expect(asIs.areas[0].worst).toBe(Math.max(...asIs.areas[0].shortfall));
  });

  it('tells how far a simulation of the same chances lies away', () => {
    const preview = previewer.preview([]);
    const row = (areaId: string | null, plan: number[]) => ({ areaId, shifts: [], hours: { asIs: plan, plan } });
    const moved = preview.areas[0].shortfall.map((chance, h) => (h === 3 ? chance + 0.048 : chance));
    const result = { rows: [row('acute', moved), row('resuscitation', preview.areas[1].shortfall), row(null, [])] };
    const gap = previewGap(result as never, preview)!;
    expect(gap.widest).toMatchObject({ areaId: 'acute', hour: 3 });
    expect(gap.mean).toBeCloseTo(0.048 / 48, 12);
  });
});

describe('the words of a plan', () => {
  it('say where, when and how much', () => {
    const words = (change: PlanChange) => changeInWords(change, basis.areas, zoneName).replaceAll('\u00a0', ' ');
    expect(words(beds())).toMatch(/^Acute: 2 beds more, Sun 22:00 to Mon 07:30$/);
    expect(words(beds({ beds: -1 }))).toContain('1 bed fewer');
    expect(words({ kind: 'demand', areaId: null, percent: -5 })).toBe('Every area: arrivals 5 % fewer');
    expect(words({ kind: 'stay', areaId: 'acute', who: 'admitted', percent: 10 })).toBe(
      'Acute: stays of admitted patients 10 % longer',
    );
  });

  it('every new change fits at once, but for what nobody counted', () => {
    for (const kind of ['beds', 'demand', 'stay', 'surge', 'closed', 'boarding out'] as const) {
      const change = newChange(kind, basis, zone, { area: 0, at: night.from + 3600 });
      expect(planFaults(basis, [change], zone), kind).toEqual([]);
    }
  });

  it('and its differences as CSV carry the cautions at their head', () => {
    const figure = { asIs: 0.4, plan: 0.25, difference: -0.15, low: -0.16, high: -0.14 };
    const plan = {
      id: 'p',
      name: 'Beds, "more"',
      basisIssuedAt: basis.issuedAt,
      result: {
        engineVersion: '3',
        replications: 10_000,
        seed: 5,
        shifts: [night],
        rows: [{ areaId: null, shifts: [figure], bedHoursShort: figure }],
      },
    } as unknown as Scenario;
    const lines = differencesCsv(plan, basis.areas, 'Saltby Bay', zoneName).split('\r\n');
    expect(lines.slice(0, 4).every((line) => line.startsWith('# '))).toBe(true);
    expect(lines[2]).toContain('Planning aid. Not for decisions about any individual patient.');
    expect(lines[4]).toBe('Area,Measure,Shift,From,To,As is,With the plan,Difference,Low,High');
    expect(lines[5]).toMatch(
      /^Whole department,chance that some area is short in the shift,Night,.*,0\.4,0\.25,-0\.15,-0\.16,-0\.14$/,
    );
  });
});

describe('SliderField', () => {
  function Field({ onValue }: { onValue: (value: number) => void }) {
    const [value, setValue] = useState(3);
    return (
      <SliderField
        label="Beds"
        unit="beds"
        value={value}
        min={-5}
        max={5}
        onChange={(next) => {
          setValue(next);
          onValue(next);
        }}
      />
    );
  }

  it('takes typed whole numbers, also past the slider, and keeps what is not one yet', async () => {
    const seen: number[] = [];
    render(<Field onValue={(value) => seen.push(value)} />);
    const typed = screen.getByLabelText('Beds, as a number');
    await userEvent.clear(typed);
    expect(seen).toEqual([]);
    await userEvent.type(typed, '12');
    expect(seen).toEqual([1, 12]);
    expect(screen.getByLabelText('Beds')).toHaveValue('12');
    await userEvent.clear(typed);
    await userEvent.tab();
    expect(typed).toHaveValue(12);
  });
});

describe('the page', () => {
  // jsdom scrolls nothing.
  beforeAll(() => {
    Element.prototype.scrollIntoView = vi.fn();
  });
  const show = (save: boolean) =>
    render(
      <QueryClientProvider client={new QueryClient()}>
        <MemoryRouter>
          <WhatIfView
            site={{ id: 's', name: 'Saltby Bay', timeZone: zoneName }}
            basis={basis}
            cautions={[{ kind: 'hourly counts', text: 'Fitted on hourly counts: mean stays are stated.' }]}
            plans={[]}
            opened={[]}
            rights={{ save, adopt: save }}
            feed={null}
            howLink={null}
            onOpened={() => undefined}
          />
        </MemoryRouter>
      </QueryClientProvider>,
    );
  const add = async (kind: string) => {
    await userEvent.selectOptions(screen.getByLabelText(/change/, { selector: 'select' }), kind);
    await userEvent.click(screen.getByRole('button', { name: 'Add it' }));
  };

  it('answers a change at once beside as is, by number and word, and says by which method', async () => {
    show(true);
    expect(screen.getByText('Not counted: Resuscitation.')).toBeInTheDocument();
    expect(screen.getByText(/^Fitted on hourly counts: mean stays are stated/)).toBeInTheDocument();
    const table = () => screen.getByRole('table', { name: /Highest chance of shortfall at a full hour in the next/ });
    expect(
      within(table())
        .getAllByRole('columnheader')
        .map(({ textContent }) => textContent),
    ).toEqual(['Area', 'As is']);
    await add('Staffed beds, more or fewer');
    expect(within(table()).getByRole('columnheader', { name: 'The plan in hand' })).toBeInTheDocument();
    expect(screen.getByText(/^Answered in \d+ ms by the exact method in this browser/)).toBeInTheDocument();
    expect(screen.getByRole('heading', { level: 1 })).toHaveTextContent(/^With this plan the worst hour/);
    expect(within(table()).getByRole('row', { name: /^Bed-hours staffed beside as is/ })).toHaveTextContent(
      /the same\+/,
    );
  });

  it('marks the field of a fault and answers nothing until it is mended', async () => {
    show(true);
    await add('An area closed');
    await add('A surge of arrivals');
    const fault = await screen.findByText(/is closed in that time: put the surge where its arrivals go/);
    expect(fault).toHaveAttribute('role', 'alert');
    expect(screen.getAllByText('mend what is marked').length).toBeGreaterThan(0);
    await userEvent.click(screen.getByRole('button', { name: 'Remove change 2' }));
    expect(screen.queryByText('mend what is marked')).toBeNull();
  });

  it('lets those try who may not save, and says so', async () => {
    show(false);
    await add('Arrivals, more or fewer');
    expect(screen.queryByRole('button', { name: 'Save and confirm' })).toBeNull();
    expect(screen.getByText(/Plans are saved and confirmed by operations managers/)).toBeInTheDocument();
  });

  it('puts the smallest change into the plan in hand', async () => {
    show(true);
    await userEvent.click(screen.getByRole('button', { name: /^Put all \d+ bed-hours into the plan in hand/ }));
    expect(screen.getByLabelText('Name of the plan')).toBeInTheDocument();
    expect(screen.getAllByText('Staffed beds, more or fewer', { selector: 'span' }).length).toBeGreaterThan(0);
  });
});
