import type { AreasBody } from '../../../shared/api/site-settings.ts';
import { readAreas } from '../../database/read-site.ts';
import type { Dependencies } from '../../dependencies.ts';
import { CareArea } from '../../entities/CareArea.ts';
import { badInput, type Fault } from '../../errors.ts';
import { changeSettings, percent, textFaults, type SettingsContext } from './change-settings.ts';

/** Saves what an operations manager sets for care areas; areas that are not named stay as they are. */
export async function saveAreas(deps: Dependencies, context: SettingsContext, body: AreasBody) {
  return changeSettings(deps, context, 'areas', body.revision, async (manager) => {
    const areas = await readAreas(manager, context.site.id);
    const nameOf = (id: string) => areas.find((area) => area.id === id)?.name;
    const namesOf = (ids: readonly string[]) =>
      areas.flatMap(({ id, name }) => (ids.includes(id) ? [name] : [])).join(', ') || null;
    const faults: Fault[] = [];
    for (const [index, { id, lendsTo, escalationNote, bedStep }] of body.areas.entries()) {
      const area = areas.find((candidate) => candidate.id === id);
      if (!area) {
        faults.push({ at: `areas.${String(index)}`, message: 'This care area does not belong to the site.' });
        continue;
      }
      if (body.areas.findIndex((other) => other.id === id) < index) {
        faults.push({ at: area.name, message: 'This care area is named twice.' });
      }
      if (bedStep > Math.max(1, area.spaces)) {
        const message = `A step of ${String(bedStep)} is more than the ${String(area.spaces)} bed spaces that exist.`;
        faults.push({ at: `${area.name}, step`, message });
      }
      for (const other of lendsTo) {
        if (other === id) faults.push({ at: area.name, message: 'An area cannot lend to itself.' });
        else if (nameOf(other) === undefined)
          faults.push({ at: area.name, message: 'It lends to an area that is not of this site.' });
      }
      faults.push(...textFaults(`${area.name}, escalation text`, escalationNote));
    }
    if (faults.length > 0) throw badInput('The care areas’ settings were refused.', faults);

    const differences = [];
    for (const { id, ...values } of body.areas) {
      const before = areas.find((area) => area.id === id);
      if (!before) continue;
      const lendsTo = areas.flatMap((area) => (values.lendsTo.includes(area.id) ? [area.id] : []));
      await manager.update(CareArea, { id }, { ...values, lendsTo });
      const rows = [
        { setting: 'Alert limit', before: percent(before.alertLimit), after: percent(values.alertLimit) },
        { setting: 'Escalation text', before: before.escalationNote || null, after: values.escalationNote || null },
        { setting: 'Step', before: String(before.bedStep), after: String(values.bedStep) },
        {
          setting: 'Notice to open',
          before: `${String(before.noticeHours)} h`,
          after: `${String(values.noticeHours)} h`,
        },
        {
          setting: 'Beds a nurse looks after',
          before: stated(before.bedsPerNurse),
          after: stated(values.bedsPerNurse),
        },
        { setting: 'Lends beds to', before: namesOf(before.lendsTo), after: namesOf(lendsTo) },
      ];
      differences.push(...rows.map((row) => ({ subject: before.name, ...row })));
    }
    return differences;
  });
}

const stated = (value: number | null) => (value === null ? null : String(value));
