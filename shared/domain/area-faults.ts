/** What an administrator states of a care area. */
export interface AreaFacts {
  name: string;
  spaceKind: 'bed' | 'chair';
  spaces: number;
  safeMinimum: number;
  bedStep: number;
  noticeHours: number;
}

export interface AreaFault {
  /** Place of the area in the list. */
  index: number;
  field: keyof AreaFacts;
  message: string;
}

/** Every fault of a list of care areas beyond what each figure's own bounds say. */
export function areaFaults(areas: readonly AreaFacts[]): AreaFault[] {
  const faults: AreaFault[] = [];
  for (const [index, { name, spaces, safeMinimum, bedStep }] of areas.entries()) {
    const key = name.trim().toLowerCase();
    if (areas.findIndex((other) => other.name.trim().toLowerCase() === key) < index)
      faults.push({ index, field: 'name', message: 'Two areas have this name.' });
    if (safeMinimum > spaces) faults.push({ index, field: 'safeMinimum', message: 'More than the spaces that exist.' });
    if (bedStep > Math.max(1, spaces))
      faults.push({ index, field: 'bedStep', message: 'More than the spaces that exist.' });
  }
  return faults;
}
