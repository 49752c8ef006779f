import type { EntityManager } from 'typeorm';
import type { RememberedMapping } from '../../../shared/api/visit-log-mapping.ts';
import { findIdentifier } from '../../../shared/domain/find-identifier.ts';
import { withArticle, type IdentifierKind } from '../../../shared/domain/identifier-kind.ts';
import { screenHeader } from '../../../shared/domain/screen-header.ts';
import { visitColumnNames, visitColumns } from '../../../shared/domain/visit-row.ts';
import type { CareArea } from '../../entities/CareArea.ts';
import { VisitLogMapping } from '../../entities/VisitLogMapping.ts';
import { badInput, type Fault } from '../../errors.ts';

/**
 * A mapping as it may be kept. Headers and values that could identify a patient refuse it, naming the
 * column and the kind; a value that is only shaped like a name or a number is left out, so that it is
 * asked about again.
 * @param now UTC seconds, for the screening
 */
export function screenMapping(
  mapping: RememberedMapping,
  areas: readonly Pick<CareArea, 'id' | 'name'>[],
  now: number,
): RememberedMapping {
  const known = new Set(areas.flatMap(({ id, name }) => [id, name]));
  const ids = new Set(areas.map(({ id }) => id));
  const faults: Fault[] = [];
  const refuse = (at: string, kind: IdentifierKind) => {
    const message = `It looks like ${withArticle(kind)} and cannot be remembered.`;
    if (!faults.some((fault) => fault.at === at && fault.message === message)) faults.push({ at, message });
  };
  for (const column of visitColumns) {
    const header = mapping.columns[column];
    const kind = header === null ? null : screenHeader(header, now);
    if (kind !== null) refuse(`header of ${visitColumnNames[column]}`, kind);
  }
  const screened = <Row extends { value: string }>(rows: readonly Row[], column: string): Row[] =>
    rows.filter(({ value }) => {
      const finding = known.has(value) ? null : findIdentifier(value, now);
      if (finding?.certainty === 'sure') refuse(`values of ${column}`, finding.kind);
      return finding === null;
    });
  const kept = {
    ...mapping,
    areas: screened(mapping.areas, visitColumnNames.care_area),
    dispositions: screened(mapping.dispositions, visitColumnNames.disposition),
    ambulances: screened(mapping.ambulances, visitColumnNames.arrived_by_ambulance),
  };
  if (kept.areas.some(({ areaId }) => areaId !== null && !ids.has(areaId)))
    faults.push({ at: `values of ${visitColumnNames.care_area}`, message: 'It names a care area of another site.' });
  if (faults.length > 0) throw badInput('The mapping cannot be remembered as it is.', faults);
  return kept;
}

/** Keeps the mapping in place of the site's last. */
export async function keepMapping(
  manager: EntityManager,
  row: Pick<VisitLogMapping, 'siteId' | 'mapping' | 'savedBy' | 'savedAt'>,
): Promise<void> {
  await manager.upsert(VisitLogMapping, row, ['siteId']);
}

/** The site's last mapping; null before the first. */
export async function readMapping(
  read: EntityManager,
  siteId: string,
): Promise<Pick<VisitLogMapping, 'mapping' | 'savedBy' | 'savedAt'> | null> {
  const row = await read.findOneBy(VisitLogMapping, { siteId });
  return row ? { mapping: row.mapping, savedBy: row.savedBy, savedAt: row.savedAt } : null;
}
