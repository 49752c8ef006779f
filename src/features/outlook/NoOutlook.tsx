import type { ReactNode } from 'react';
import type { Tonight } from '../../../shared/api/outlooks.ts';
import type { Site } from '../../../shared/api/sites.ts';
import { PageHead } from '../../components/PageHead.tsx';
import { AreaGutter } from './AreaGutter.tsx';
import type { Rights } from './AreaGutter.tsx';
import { UndecidedRow } from './UndecidedRow.tsx';

const titles = {
  'no model': 'There is no outlook: no arrival model is in use.',
  'no staffed-bed plan': 'There is no outlook: no staffed-bed plan is saved.',
  'not computed yet': 'The first outlook is still to come.',
} as const;

/** Tonight without an outlook: why, what to do about it, and the census fields, which can be filled all the same. */
export function NoOutlook({
  tonight,
  site,
  rights,
  actions,
  report,
}: {
  tonight: Tonight;
  site: Site;
  rights: Rights;
  /** Where this person can do something about it. */
  actions: ReactNode;
  /** What is said when a census came through. */
  report: ReactNode;
}) {
  return (
    <>
      <PageHead
        tab={`Tonight, ${site.name}`}
        title={
          tonight.computing ? 'The outlook is being computed.' : titles[tonight.missing?.reason ?? 'not computed yet']
        }
        lede={
          <>
            <p>{tonight.missing?.next ?? 'It appears here by itself within a few seconds.'}</p>
            <div className="mt-4 flex flex-wrap gap-4">{actions}</div>
          </>
        }
      />
      {report}
      {rights.enterCensus ? (
        <div className="page-pad grid max-w-sm gap-4 pt-4">
          <h2 className="text-section">Census</h2>
          {site.areas.map((area, index) => (
            <AreaGutter
              key={area.id}
              {...{ area, index, rights: { ...rights, changeBeds: false } }}
              row={null}
              siteId={site.id}
              timeZone={site.timeZone}
              now={tonight.now}
              open
            />
          ))}
          <div className="-mx-page">
            <UndecidedRow rights={rights} timeZone={site.timeZone} />
          </div>
        </div>
      ) : null}
    </>
  );
}
