import { useSearchParams } from 'react-router-dom';
import type { ReactNode } from 'react';
import type { ModelDetail } from '../../../shared/api/arrival-models.ts';
import { RiskMark } from '../../../shared/charts/RiskMark.tsx';
import { PanelBoundary } from '../../components/PanelBoundary.tsx';
import { SelectField } from '../../components/Field.tsx';
import { DataTable } from '../../components/DataTable.tsx';
import { formatNumber } from '../../lib/format.ts';
import { variationInWords } from './model-words.ts';
import { RateHeatMap } from './RateHeatMap.tsx';
import { StreamTable } from './StreamTable.tsx';

/** A setting's name, which is in words already, as a line begins. */
function settingName(words: string): string {
  return words.charAt(0).toUpperCase() + words.slice(1);
}

function settingValue(value: string | number | boolean | null): string {
  if (value === null) return 'none';
  if (typeof value === 'boolean') return value ? 'yes' : 'no';
  return typeof value === 'number' ? String(Number(value.toPrecision(4))) : value;
}

function Part({ title, lead, children }: { title: string; lead?: string; children: ReactNode }) {
  return (
    <section className="border-t border-hair pt-4">
      <h2 className="text-section">{title}</h2>
      {lead ? <p className="mb-3 max-w-[46rem] text-ink2">{lead}</p> : null}
      <PanelBoundary className="py-2">{children}</PanelBoundary>
    </section>
  );
}

/** Everything a model says of itself: rates, stays, variation, findings, and what it was made from. */
export function ModelReport({ model }: { model: ModelDetail }) {
  const [search, setSearch] = useSearchParams();
  const area = model.areas.find((candidate) => candidate.areaId === search.get('area')) ?? model.areas[0];
  return (
    <div className="grid grid-cols-[minmax(0,1fr)] gap-8">
      <Part
        title="What it found"
        lead="Effect sizes and what they mean. With many visits every test of fit would fail; the size is what counts."
      >
        <dl className="grid max-w-[56rem] gap-3">
          {model.findings.map((finding) => (
            <div key={finding.name} className="grid gap-x-6 sm:grid-cols-[16rem_1fr]">
              <dt className="font-bold text-ink">
                {finding.name}
                <div className="text-quiet font-semibold text-ink2">{finding.size}</div>
              </dt>
              <dd className={finding.concern ? 'flex gap-2 font-extrabold text-ink' : 'text-ink2'}>
                {finding.concern ? <RiskMark step={3} className="mt-1 h-4 w-5 shrink-0" /> : null}
                <span>{finding.meaning}</span>
              </dd>
            </div>
          ))}
          {model.findings.length === 0 ? <p className="text-ink2">Nothing out of the ordinary.</p> : null}
        </dl>
      </Part>
      {area ? (
        <Part title="When people arrive" lead="Arrivals an hour in each hour of the week, at the level of now.">
          <div className="mb-3 max-w-64">
            <SelectField
              label="Care area"
              value={area.areaId}
              onChange={(event) => setSearch({ area: event.target.value }, { replace: true, preventScrollReset: true })}
              options={model.areas.map((candidate) => ({ value: candidate.areaId, label: candidate.name }))}
            />
          </div>
          <RateHeatMap key={area.areaId} area={area} />
        </Part>
      ) : null}
      <Part
        title="How long they stay, and when they leave"
        lead="Mean length of stay, arrival to departure, with its limits. Departures through the day: how fast patients leave in each block of hours, 1 as on average."
      >
        <StreamTable model={model} />
      </Part>
      <Part title="How days differ">
        <div className="max-w-[46rem] text-ink2">
          {variationInWords(model).map((sentence) => (
            <p key={sentence} className="mb-2">
              {sentence}
            </p>
          ))}
          <p className="text-quiet">Structure chosen by score on past weeks: {model.variation.structure}.</p>
        </div>
      </Part>
      <Part title="What it was made from">
        <DataTable
          caption="Visit logs"
          rows={model.lineage}
          rowKey={(log) => log.logId}
          columns={[
            { key: 'file', header: 'File', rowHeader: true, cell: (log) => log.fileName },
            { key: 'rows', header: 'Rows', figure: true, cell: (log) => formatNumber(log.rows) },
            {
              key: 'hash',
              header: 'SHA-256',
              cell: (log) => <span className="text-quiet break-all text-ink2">{log.sha256}</span>,
            },
          ]}
        />
        <dl className="mt-4 grid max-w-[46rem] grid-cols-[auto_1fr] gap-x-6 gap-y-1 text-quiet">
          {[...Object.entries(model.settings), ['engine version', model.engineVersion] as const].map(
            ([name, value]) => (
              <div key={name} className="contents">
                <dt className="font-bold text-ink">{settingName(name)}</dt>
                <dd className="text-ink2">{settingValue(value)}</dd>
              </div>
            ),
          )}
        </dl>
      </Part>
    </div>
  );
}
