import type { ReactNode } from 'react';
import { Link } from 'react-router-dom';
import type { ModelSummary } from '../../../shared/api/arrival-models.ts';
import { DataTable } from '../../components/DataTable.tsx';
import { formatDateTime } from '../../lib/format.ts';
import { groundsInWords, sinceFitInWords, statusWord } from './model-words.ts';

/** All models of the site: the one in use, candidates, earlier ones. */
export function ModelList({
  models,
  timeZone,
  hrefOf,
  progressOf,
  empty,
}: {
  models: readonly ModelSummary[];
  timeZone: string;
  hrefOf: (modelId: string) => string;
  /** How far a fit is. */
  progressOf: (jobId: string) => ReactNode;
  empty: ReactNode;
}) {
  return (
    <DataTable
      caption="Arrival models"
      captionHidden
      rows={models}
      rowKey={(model) => model.id}
      empty={empty}
      columns={[
        {
          key: 'status',
          header: 'Model',
          rowHeader: true,
          value: (model) => statusWord(model.status),
          cell: (model) => (
            <Link to={hrefOf(model.id)} className="link inline-block min-h-6">
              {statusWord(model.status)}
              {sinceFitInWords(model).length > 0 ? ', its visits have changed since' : ''}
            </Link>
          ),
        },
        {
          key: 'fitted',
          header: 'Fitted',
          value: (model) => model.fittedAt,
          cell: (model) =>
            model.status === 'fitting' && model.jobId ? (
              progressOf(model.jobId)
            ) : model.fittedAt === null ? (
              <span className="text-ink2">{model.error ?? 'Not fitted'}</span>
            ) : (
              `${formatDateTime(model.fittedAt, timeZone)}, ${model.fittedBy}`
            ),
        },
        { key: 'grounds', header: 'On', cell: (model) => groundsInWords(model, timeZone) },
        {
          key: 'verdict',
          header: 'Approved',
          value: (model) => model.approvedAt,
          cell: (model) =>
            model.approvedAt === null
              ? '–'
              : `${formatDateTime(model.approvedAt, timeZone)}, ${model.approvedBy ?? ''}`,
        },
        { key: 'reason', header: 'Reason', cell: (model) => <span className="text-ink2">{model.reason ?? '–'}</span> },
      ]}
    />
  );
}
