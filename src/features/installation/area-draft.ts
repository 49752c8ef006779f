import type { AreaBody } from '../../../shared/api/installation.ts';
import { areaFaults } from '../../../shared/domain/area-faults.ts';

/** An area as it stands in the fields: figures are text until they are sent. */
export type AreaDraft = Record<Exclude<keyof AreaBody, 'spaceKind'>, string> & { spaceKind: AreaBody['spaceKind'] };
export type AreaDraftFaults = Partial<Record<keyof AreaBody, string>>;

export const emptyArea: AreaDraft = {
  name: '',
  spaceKind: 'bed',
  spaces: '',
  safeMinimum: '',
  bedStep: '1',
  noticeHours: '2',
};

export function draftOfArea(area: AreaBody): AreaDraft {
  const { name, spaceKind, spaces, safeMinimum, bedStep, noticeHours } = area;
  return {
    name,
    spaceKind,
    spaces: String(spaces),
    safeMinimum: String(safeMinimum),
    bedStep: String(bedStep),
    noticeHours: String(noticeHours),
  };
}

const whole = (text: string) => (/^\d+$/.test(text.trim()) ? Number(text) : NaN);

function bodyOf(draft: AreaDraft): AreaBody {
  return {
    name: draft.name.trim(),
    spaceKind: draft.spaceKind,
    spaces: whole(draft.spaces),
    safeMinimum: whole(draft.safeMinimum),
    bedStep: whole(draft.bedStep),
    noticeHours: /^\d+([.,]\d+)?$/.test(draft.noticeHours.trim()) ? Number(draft.noticeHours.replace(',', '.')) : NaN,
  };
}

/** Reads drafts of areas: the bodies to send, or the faults of each. */
export function readAreas(drafts: readonly AreaDraft[]): {
  bodies: AreaBody[];
  faults: AreaDraftFaults[];
  sound: boolean;
} {
  const bodies = drafts.map(bodyOf);
  const faults = bodies.map((body): AreaDraftFaults => {
    const found: AreaDraftFaults = {};
    if (body.name.length < 2) found.name = 'Name the area.';
    if (!(body.spaces <= 500)) found.spaces = 'A whole number up to 500.';
    if (!(body.safeMinimum <= 500)) found.safeMinimum = 'A whole number up to 500.';
    if (!(body.bedStep >= 1 && body.bedStep <= 50)) found.bedStep = 'A whole number from 1 to 50.';
    if (!(body.noticeHours <= 720)) found.noticeHours = 'Hours, up to 720.';
    return found;
  });
  for (const { index, field, message } of areaFaults(bodies)) faults[index][field] ??= message;
  return { bodies, faults, sound: faults.every((found) => Object.keys(found).length === 0) };
}
