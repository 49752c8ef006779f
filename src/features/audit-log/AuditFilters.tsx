import { useState } from 'react';
import { auditTopics } from '../../../shared/domain/audit-topic.ts';
import { Button } from '../../components/Button.tsx';
import { SelectField, TextField } from '../../components/Field.tsx';
import type { AuditFilter } from './queries.ts';

/** What to look for; it goes into the address when it is asked for. */
export function AuditFilters({
  filter,
  sites,
  onFilter,
}: {
  filter: AuditFilter;
  /** To choose from; none at a site's own trail. */
  sites: readonly { id: string; name: string }[];
  onFilter: (filter: AuditFilter) => void;
}) {
  const [draft, setDraft] = useState(filter);
  const change = (part: Partial<AuditFilter>) => setDraft({ ...draft, ...part });
  return (
    <form
      aria-label="Filter the trail"
      className="flex flex-wrap items-end gap-4"
      onSubmit={(event) => {
        event.preventDefault();
        onFilter(draft);
      }}
    >
      <div className="w-full sm:w-60">
        <SelectField
          label="About"
          value={draft.event}
          onChange={(event) => change({ event: event.target.value })}
          options={[
            { value: '', label: 'Everything' },
            ...Object.entries(auditTopics).map(([value, label]) => ({ value, label })),
          ]}
        />
      </div>
      {sites.length > 0 ? (
        <div className="w-full sm:w-52">
          <SelectField
            label="Site"
            value={draft.site}
            onChange={(event) => change({ site: event.target.value })}
            options={[
              { value: '', label: 'All, and the installation' },
              ...sites.map(({ id, name }) => ({ value: id, label: name })),
            ]}
          />
        </div>
      ) : null}
      <div className="w-full sm:w-48">
        <TextField
          label="Who"
          maxLength={80}
          value={draft.actor}
          onChange={(event) => change({ actor: event.target.value })}
        />
      </div>
      <div className="w-[calc(50%-0.5rem)] sm:w-40">
        <TextField
          label="From day"
          type="date"
          value={draft.from}
          onChange={(event) => change({ from: event.target.value })}
        />
      </div>
      <div className="w-[calc(50%-0.5rem)] sm:w-40">
        <TextField
          label="To day"
          type="date"
          value={draft.until}
          onChange={(event) => change({ until: event.target.value })}
        />
      </div>
      <Button type="submit" look="second">
        Show
      </Button>
    </form>
  );
}
