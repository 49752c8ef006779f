import { settingSectionNames, settingSections, type SettingSection } from '../../../shared/domain/site-settings.ts';
import { DataTable } from '../../components/DataTable.tsx';
import { SelectField } from '../../components/Field.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { SkeletonLines } from '../../components/Skeleton.tsx';
import { formatDateTime, formatNumber } from '../../lib/format.ts';
import { useSettingHistory } from './queries.ts';

/** Who changed what, when, from what to what; of one part if one is chosen. */
export function SettingHistory({
  siteId,
  timeZone,
  section,
  onSection,
}: {
  siteId: string;
  timeZone: string;
  /** Null: every part. */
  section: SettingSection | null;
  onSection: (section: SettingSection | null) => void;
}) {
  const query = useSettingHistory(siteId);
  const rows = query.data?.changes.filter((change) => section === null || change.section === section) ?? [];
  return (
    <section id="history" aria-labelledby="history-title" className="grid max-w-[70rem] grid-cols-1 scroll-mt-4 gap-4">
      <h2 id="history-title" className="text-section">
        History
      </h2>
      <div className="max-w-xs">
        <SelectField
          label="Of"
          value={section ?? ''}
          options={[
            { value: '', label: 'Every part' },
            ...settingSections.map((value) => ({ value, label: settingSectionNames[value] })),
          ]}
          onChange={(event) => onSection(settingSections.find((value) => value === event.target.value) ?? null)}
        />
      </div>
      {query.isError && !query.data ? (
        <ProblemNotice error={query.error} onRetry={() => void query.refetch()} retrying={query.isFetching} />
      ) : null}
      {query.isPending ? <SkeletonLines lines={4} label="Loading the history" /> : null}
      {query.data ? (
        <>
          <DataTable
            caption="Changes of settings, newest first"
            captionHidden
            rows={rows}
            rowKey={({ id }) => id}
            empty="Nothing was changed since the site was set up."
            columns={[
              { key: 'at', header: 'When', cell: ({ at }) => formatDateTime(at, timeZone) },
              { key: 'by', header: 'Who', cell: ({ madeBy }) => madeBy },
              {
                key: 'what',
                header: 'What',
                rowHeader: true,
                cell: ({ subject, setting }) => (subject === null ? setting : `${subject}: ${setting.toLowerCase()}`),
              },
              { key: 'before', header: 'Old', cell: ({ before }) => before ?? <span className="text-ink3">none</span> },
              { key: 'after', header: 'New', cell: ({ after }) => after ?? <span className="text-ink3">none</span> },
            ]}
          />
          {query.data.total > query.data.changes.length ? (
            <p className="text-quiet text-ink2">
              The newest {formatNumber(query.data.changes.length)} of {formatNumber(query.data.total)} changes. The
              audit trail holds all.
            </p>
          ) : null}
        </>
      ) : null}
    </section>
  );
}
