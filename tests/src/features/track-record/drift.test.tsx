import { QueryClient, QueryClientProvider } from '@tanstack/react-query';
import { render, screen } from '@testing-library/react';
import { MemoryRouter } from 'react-router-dom';
import { beforeEach, describe, expect, it } from 'vitest';
import { driftSentence } from '../../../../shared/forecasting/drift-sentence.ts';
import type { TrackRecord } from '../../../../shared/api/track-record.ts';
import { TonightView } from '../../../../src/features/outlook/TonightView.tsx';
import { DriftNotice, RecordGrounds } from '../../../../src/features/track-record/RecordGrounds.tsx';
import { WeekView } from '../../../../src/features/week-ahead/WeekView.tsx';
import { buildWeek } from '../../../support/build-week.ts';
import { buildCensus, buildSite, buildTonight } from '../outlook/build-tonight.ts';

const site = buildSite();
const text = driftSentence({ series: 'arrivals', kind: 'more than forecast', ratio: 1.09 }, '2026-03-02');
const caution = { kind: 'model drifted' as const, text };
const finding = {
  series: 'arrivals' as const,
  kind: 'more than forecast' as const,
  foundAt: 1_796_000_000,
  since: 1_795_000_000,
  ratio: 1.09,
  text,
};

beforeEach(() => {
  // jsdom lays nothing out and scrolls nothing.
  Element.prototype.scrollTo = () => undefined;
});

describe('a model that has drifted', () => {
  it('is told of on Tonight, with what to do', () => {
    render(
      <QueryClientProvider client={new QueryClient({ defaultOptions: { queries: { retry: false } } })}>
        <MemoryRouter>
          <TonightView
            tonight={{ ...buildTonight(), cautions: [caution] }}
            loadedAt={Date.now()}
            site={site}
            census={buildCensus()}
            rights={{ enterCensus: false, changeBeds: false, acknowledge: false }}
            stale={null}
            emptyActions={null}
            howHref="/how"
            nightLog={null}
          />
        </MemoryRouter>
      </QueryClientProvider>,
    );
    expect(screen.getAllByText(/Arrivals have run 9 % above.*Have the model fitted anew/).length).toBeGreaterThan(0);
  });

  it('is told of on Week ahead', () => {
    render(
      <MemoryRouter>
        <WeekView
          week={{ ...buildWeek(), cautions: [caution] }}
          site={site}
          refreshError={null}
          emptyActions={null}
          links={null}
          calendarLink={null}
          setLimit={null}
          how={null}
        />
      </MemoryRouter>,
    );
    expect(screen.getAllByText(/Arrivals have run 9.% above.*Have the model fitted anew/).length).toBeGreaterThan(0);
  });

  it('heads the track record with every finding; without one, the watch says how long it has looked', () => {
    const drift = { modelId: 'm', weeks: 9, foundAt: 1_796_000_000, findings: [finding] };
    const { rerender } = render(<DriftNotice drift={drift} />);
    expect(screen.getByText('The model in use has drifted')).toBeInTheDocument();
    expect(screen.getByText(text)).toBeInTheDocument();
    rerender(<DriftNotice drift={{ ...drift, foundAt: null, findings: [] }} />);
    expect(screen.getByText(/9 whole weeks so far: nothing that chance does not explain/)).toBeInTheDocument();
    rerender(<DriftNotice drift={{ ...drift, weeks: 1, foundAt: null, findings: [] }} />);
    expect(screen.getByText('Too early to watch the model in use')).toBeInTheDocument();
  });
});

describe('what the record stands on', () => {
  it('names every outlook, those whose log was withdrawn among them', () => {
    const counted = { scored: 3, waiting: 2, withdrawn: 4, notRecorded: 0, overtaken: 1, withoutLaws: 0 };
    const record = {
      outlooks: { ...counted, issued: 10, recomputed: 0, replicationsRecomputed: null, firstAt: null },
      weekOutlooks: { ...counted, issued: 12, withoutLaws: 2, recomputed: 5 },
      summary: { n: 3, weeks: 1 },
    } as TrackRecord;
    render(<RecordGrounds record={record} timeZone="Europe/London" />);
    const all = document.body.textContent.replace(/\u00a0/g, ' ');
    expect(all).toContain(
      '10 outlooks were issued; none is left out or changed: 3 are scored, 2 wait for a log that tells what came, 4 are not scored because the log that told was withdrawn, 1 was followed',
    );
    expect(all).toContain('Of the week ahead 12 outlooks were issued: 3 are scored');
    expect(all).toContain('5 of them were recomputed later');
  });

  it('speaks of one outlook as of one', () => {
    const counted = { scored: 1, waiting: 1, withdrawn: 1, notRecorded: 1, overtaken: 0, withoutLaws: 0 };
    const record = {
      outlooks: { ...counted, issued: 4, recomputed: 1, replicationsRecomputed: 500, firstAt: null },
      weekOutlooks: { ...counted, scored: 0, waiting: 1, withdrawn: 0, notRecorded: 0, issued: 1, recomputed: 1 },
      summary: { n: 1, weeks: 1 },
    } as TrackRecord;
    render(<RecordGrounds record={record} timeZone="Europe/London" />);
    const all = document.body.textContent.replace(/\u00a0/g, ' ');
    expect(all).toContain(
      '1 is scored, 1 waits for a log that tells what came, 1 is not scored because the log that told was withdrawn, 1 fell in hours',
    );
    expect(all).toContain('1 outlook was issued: 0 are scored, 1 waits');
    expect(all).toContain('1 of them was recomputed later. It is what stands behind');
    expect(all).toContain('1 was recomputed later');
  });
});
