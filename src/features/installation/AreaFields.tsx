import { SelectField, TextField } from '../../components/Field.tsx';
import type { AreaDraft, AreaDraftFaults } from './area-draft.ts';

/** The fields of one care area. */
export function AreaFields({
  draft,
  faults,
  onDraft,
}: {
  draft: AreaDraft;
  faults: AreaDraftFaults;
  onDraft: (draft: AreaDraft) => void;
}) {
  const field = (key: Exclude<keyof AreaDraft, 'spaceKind'>, label: string, numeric = true) => (
    <TextField
      label={label}
      maxLength={numeric ? 6 : 80}
      {...(numeric ? { inputMode: 'decimal' as const } : {})}
      value={draft[key]}
      error={faults[key]}
      onChange={(event) => onDraft({ ...draft, [key]: event.target.value })}
    />
  );
  return (
    <div className="grid grid-cols-2 items-end gap-4 sm:grid-cols-3 lg:grid-cols-6">
      {field('name', 'Name', false)}
      <SelectField
        label="A space is a"
        value={draft.spaceKind}
        onChange={(event) => onDraft({ ...draft, spaceKind: event.target.value === 'chair' ? 'chair' : 'bed' })}
        options={[
          { value: 'bed', label: 'bed' },
          { value: 'chair', label: 'chair' },
        ]}
      />
      {field('spaces', 'Spaces that exist')}
      {field('safeMinimum', 'Safe minimum staffed')}
      {field('bedStep', 'Opened in steps of')}
      {field('noticeHours', 'Notice to open, hours')}
    </div>
  );
}
