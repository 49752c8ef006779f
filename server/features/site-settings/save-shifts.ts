import type { ShiftsBody } from '../../../shared/api/site-settings.ts';
import { clockText } from '../../../shared/domain/clock-text.ts';
import type { SettingDifference } from '../../database/record-setting-changes.ts';
import { newId } from '../../database/new-id.ts';
import { readShifts } from '../../database/read-site.ts';
import type { Dependencies } from '../../dependencies.ts';
import { Shift } from '../../entities/Shift.ts';
import { badInput, type Fault } from '../../errors.ts';
import { changeSettings, textFaults, type SettingsContext } from './change-settings.ts';

/** Saves all shifts of a site: what is not named any more is taken away. The contract's schema has refused holes and long overlaps. */
export async function saveShifts(deps: Dependencies, context: SettingsContext, body: ShiftsBody) {
  const siteId = context.site.id;
  return changeSettings(deps, context, 'shifts', body.revision, async (manager) => {
    const before = await readShifts(manager, siteId);
    const faults: Fault[] = [];
    for (const [index, { id, name }] of body.shifts.entries()) {
      const at = `shifts.${String(index)}`;
      if (id !== null && !before.some((shift) => shift.id === id)) {
        faults.push({ at, message: 'This shift does not belong to the site.' });
      } else if (id !== null && body.shifts.findIndex((other) => other.id === id) < index) {
        faults.push({ at, message: `${name} stands for a shift that is named twice.` });
      }
      faults.push(...textFaults(`${at}.name`, name));
    }
    if (faults.length > 0) throw badInput('The shifts were refused.', faults);

    const differences: SettingDifference[] = [];
    for (const shift of before) {
      if (body.shifts.some(({ id }) => id === shift.id)) continue;
      await manager.delete(Shift, { id: shift.id });
      differences.push({ subject: shift.name, setting: 'Shift', before: hours(shift), after: null });
    }
    for (const { id, ...values } of body.shifts) {
      const old = before.find((shift) => shift.id === id);
      if (old) {
        await manager.update(Shift, { id: old.id }, values);
        differences.push(
          { subject: values.name, setting: 'Shift’s name', before: old.name, after: values.name },
          { subject: values.name, setting: 'Shift', before: hours(old), after: hours(values) },
        );
      } else {
        await manager.insert(Shift, { id: newId(), siteId, ...values });
        differences.push({ subject: values.name, setting: 'Shift', before: null, after: hours(values) });
      }
      const [was, is] = [leadTime(old?.leadTimeHours ?? null), leadTime(values.leadTimeHours)];
      differences.push({ subject: values.name, setting: 'Lead time to book', before: was, after: is });
    }
    return differences;
  });
}

const hours = ({ startMinute, endMinute }: Pick<Shift, 'startMinute' | 'endMinute'>) =>
  `${clockText(startMinute)} to ${clockText(endMinute)}`;
const leadTime = (value: number | null) => (value === null ? null : `${String(value)} h`);
