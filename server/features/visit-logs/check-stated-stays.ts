import type { StatedStaysInput } from '../../../shared/api/visit-logs.ts';
import { withArticle } from '../../../shared/domain/identifier-kind.ts';
import { screenNote } from '../../../shared/domain/screen-note.ts';
import type { CareArea } from '../../entities/CareArea.ts';
import type { StatedStays } from '../../entities/VisitLog.ts';
import { badInput, type Fault } from '../../errors.ts';
import type { CheckedFile } from './checked-file.ts';
import { presentNeedsMean } from './present.ts';

/**
 * The mean stays that hourly counts need: one for each area of the file, with a source.
 * Every fault at once.
 */
export function checkStatedStays(
  checked: CheckedFile,
  areas: readonly CareArea[],
  stated: StatedStaysInput | undefined,
): StatedStays | null {
  const needed = presentNeedsMean(checked, areas);
  const faults: Fault[] = [];
  const given = stated?.areas ?? [];
  given.forEach(({ areaId }, index) => {
    const at = `statedStays.areas.${String(index)}.areaId`;
    if (!areas.some(({ id }) => id === areaId)) faults.push({ at, message: 'It is no care area of this site.' });
    else if (!needed.includes(areaId)) {
      const message =
        checked.counted === null
          ? 'Visits tell how long stays are: state none.'
          : 'The file holds no arrival of this area: state no mean.';
      faults.push({ at, message });
    } else if (given.findIndex((other) => other.areaId === areaId) < index)
      faults.push({ at, message: 'The area is named twice.' });
  });
  for (const areaId of needed) {
    if (given.some((area) => area.areaId === areaId)) continue;
    const name = areas.find(({ id }) => id === areaId)?.name ?? areaId;
    faults.push({
      at: 'statedStays',
      message: `State the mean length of stay of ${name}, with where the figure is from: hourly counts do not tell it.`,
    });
  }
  const kind = stated ? screenNote(stated.source) : null;
  if (kind !== null) {
    faults.push({
      at: 'statedStays.source',
      message: `It looks as if it held ${withArticle(kind)}. Leave out anything that could identify a person.`,
    });
  }
  if (faults.length > 0) throw badInput('The counts cannot be loaded as they are.', faults);
  if (!stated || needed.length === 0) return null;
  return {
    source: stated.source,
    areas: stated.areas.map(({ areaId, meanHours }) => ({
      areaCode: areas.find(({ id }) => id === areaId)?.code ?? 0,
      meanHours,
    })),
  };
}
