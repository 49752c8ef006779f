import type { WhatIfBasis } from '../../../shared/api/scenarios.ts';
import type { PlanChange, PlanFault } from '../../../shared/domain/plan-change.ts';
import { Button } from '../../components/Button.tsx';
import { SelectField } from '../../components/Field.tsx';
import { changeNames, unitOf } from './plan-words.ts';
import { SliderField } from './SliderField.tsx';
import { InstantField, WindowFields, type TimeFrame } from './WhenFields.tsx';

const everyArea = 'every area';

/** The fields of one change: where, when and how much. */
export function ChangeFields({
  change,
  place,
  basis,
  frame,
  faults,
  onChange,
  onRemove,
}: {
  change: PlanChange;
  /** Place in the plan, from 0; faults name it. */
  place: number;
  basis: WhatIfBasis;
  frame: TimeFrame;
  faults: readonly PlanFault[];
  onChange: (change: PlanChange) => void;
  onRemove: () => void;
}) {
  const { areas } = basis;
  const area = areas.find(({ areaId }) => areaId === change.areaId);
  const faultOf = (field: string) => faults.find(({ at }) => at === `changes.${String(place)}.${field}`)?.message;
  const options = areas.map(({ areaId, name }) => ({ value: areaId, label: name }));
  const unit = unitOf(area);
  return (
    <fieldset className="grid gap-3 border-t border-hair pt-3">
      <legend className="sr-only">
        Change {place + 1}: {changeNames[change.kind]}
      </legend>
      <div className="flex items-baseline justify-between gap-4">
        <span className="text-area">{changeNames[change.kind]}</span>
        <Button look="quiet" aria-label={`Remove change ${String(place + 1)}`} onClick={onRemove}>
          Remove
        </Button>
      </div>
      {change.kind === 'demand' || change.kind === 'stay' ? (
        <SelectField
          label="Where"
          value={change.areaId ?? everyArea}
          options={[{ value: everyArea, label: 'Every area' }, ...options]}
          error={faultOf('areaId')}
          onChange={({ target }) => onChange({ ...change, areaId: target.value === everyArea ? null : target.value })}
        />
      ) : (
        <SelectField
          label={change.kind === 'closed' ? 'Closed area' : 'Where'}
          value={change.areaId}
          options={options}
          error={faultOf('areaId')}
          onChange={({ target }) => onChange({ ...change, areaId: target.value })}
        />
      )}
      {change.kind === 'stay' ? (
        <SelectField
          label="Whose stay"
          value={change.who}
          options={[
            { value: 'everyone', label: 'Everyone’s' },
            { value: 'admitted', label: 'Admitted patients’ only (inpatient beds slower or faster)' },
          ]}
          onChange={({ target }) => onChange({ ...change, who: target.value === 'everyone' ? 'everyone' : 'admitted' })}
        />
      ) : null}
      {'from' in change ? (
        <WindowFields
          from={change.from}
          to={change.to}
          frame={frame}
          errors={{ from: faultOf('from'), to: faultOf('to') }}
          onChange={(window) => onChange({ ...change, ...window })}
        />
      ) : null}
      {change.kind === 'demand' || change.kind === 'stay' ? (
        <SliderField
          label={change.kind === 'demand' ? 'Arrivals more (+) or fewer (−)' : 'Stays longer (+) or shorter (−)'}
          unit="%"
          value={change.percent}
          min={-50}
          max={100}
          error={faultOf('percent')}
          onChange={(percent) => onChange({ ...change, percent })}
        />
      ) : null}
      {change.kind === 'beds' ? (
        <SliderField
          label={`${unit === 'chair' ? 'Chairs' : 'Beds'} more (+) or fewer (−)`}
          unit={`${unit}s`}
          value={change.beds}
          min={-(area?.spaces ?? 10)}
          max={area?.spaces ?? 10}
          error={faultOf('beds')}
          onChange={(beds) => onChange({ ...change, beds })}
        />
      ) : null}
      {change.kind === 'boarding out' ? (
        <>
          <SliderField
            label={`Patients, of ${area?.boarding === null || area === undefined ? 'none counted' : `${String(area.boarding)} boarding`}`}
            unit="out"
            value={change.patients}
            min={1}
            max={Math.max(1, area?.boarding ?? 1)}
            error={faultOf('patients')}
            onChange={(patients) => onChange({ ...change, patients })}
          />
          <InstantField
            label="Out by"
            value={change.by}
            frame={frame}
            error={faultOf('by')}
            onChange={(by) => onChange({ ...change, by })}
          />
        </>
      ) : null}
      {change.kind === 'surge' ? (
        <SliderField
          label="Extra arrivals in that time"
          unit="people"
          value={change.patients}
          min={1}
          max={60}
          error={faultOf('patients')}
          onChange={(patients) => onChange({ ...change, patients })}
        />
      ) : null}
      {change.kind === 'closed' ? (
        <SelectField
          label="Its arrivals go to"
          value={change.toAreaId ?? 'elsewhere'}
          options={[
            { value: 'elsewhere', label: 'Elsewhere: not to this department' },
            ...options.filter(({ value }) => value !== change.areaId),
          ]}
          error={faultOf('toAreaId')}
          onChange={({ target }) =>
            onChange({ ...change, toAreaId: target.value === 'elsewhere' ? null : target.value })
          }
        />
      ) : null}
    </fieldset>
  );
}
