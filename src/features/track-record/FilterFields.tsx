import { trackWeeks, type TrackFilter, type TrackRecord } from '../../../shared/api/track-record.ts';
import { leadInWords } from '../../../shared/domain/record-lead.ts';
import { SelectField } from '../../components/Field.tsx';

const measures: Record<TrackFilter['measure'], string> = {
  need: 'Need at an hour',
  peak: 'Highest need of a shift',
  arrivals: 'Arrivals of a day',
  'shift arrivals': 'Arrivals of a shift',
};

/** What of the record is looked at. */
export function FilterFields({
  record,
  filter,
  onChange,
}: {
  record: TrackRecord;
  filter: TrackFilter;
  onChange: (parts: Partial<TrackFilter>) => void;
}) {
  // Where a measure has nothing so far ahead the record shows the nearest, and says so here.
  const { lead } = record.filter;
  const leads = [...new Set([...record.leads, lead])].sort((a, b) => a - b);
  return (
    <form
      aria-label="What is looked at"
      className="grid grid-cols-2 gap-x-4 gap-y-3 md:grid-cols-3 xl:grid-cols-6"
      onSubmit={(event) => {
        event.preventDefault();
      }}
    >
      <SelectField
        label="Forecast of"
        value={filter.measure}
        options={Object.entries(measures).map(([value, label]) => ({ value, label }))}
        onChange={(event) => {
          onChange({ measure: event.target.value as TrackFilter['measure'] });
        }}
      />
      <SelectField
        label="How far ahead"
        value={String(lead)}
        options={leads.map((hours) => ({ value: String(hours), label: leadInWords(record.filter.measure, hours) }))}
        onChange={(event) => {
          onChange({ lead: Number(event.target.value) });
        }}
      />
      <SelectField
        label="Area"
        value={filter.area}
        options={[
          { value: '', label: 'Whole department' },
          ...record.areas.map(({ id, name }) => ({ value: id, label: name })),
        ]}
        onChange={(event) => {
          onChange({ area: event.target.value });
        }}
      />
      <SelectField
        label="Shift"
        value={filter.shift}
        disabled={filter.measure === 'arrivals'}
        options={[{ value: '', label: 'All shifts' }, ...record.shifts.map((name) => ({ value: name, label: name }))]}
        onChange={(event) => {
          onChange({ shift: event.target.value });
        }}
      />
      <SelectField
        label="Model"
        value={filter.model}
        options={[
          { value: '', label: 'All models' },
          ...record.models.map(({ id, name }) => ({ value: id, label: name })),
        ]}
        onChange={(event) => {
          onChange({ model: event.target.value });
        }}
      />
      <SelectField
        label="Weeks back"
        value={String(filter.weeks)}
        options={trackWeeks.map((weeks) => ({ value: String(weeks), label: `${String(weeks)} weeks` }))}
        onChange={(event) => {
          onChange({ weeks: Number(event.target.value) });
        }}
      />
    </form>
  );
}
