import { useParams, useSearchParams } from 'react-router-dom';
import { settingSections } from '../../shared/domain/site-settings.ts';
import { Notice, ProblemNotice } from '../components/Notice.tsx';
import { PageHead } from '../components/PageHead.tsx';
import { PanelBoundary } from '../components/PanelBoundary.tsx';
import { SkeletonLines } from '../components/Skeleton.tsx';
import { useSession } from '../features/sign-in/session.ts';
import { AreaSettings } from '../features/site-settings/AreaSettings.tsx';
import { CalendarSettings } from '../features/site-settings/CalendarSettings.tsx';
import { OnCallSettings } from '../features/site-settings/OnCallSettings.tsx';
import { useSiteSettings } from '../features/site-settings/queries.ts';
import { RuleSettings } from '../features/site-settings/RuleSettings.tsx';
import { SettingHistory } from '../features/site-settings/SettingHistory.tsx';
import { ShiftSettings } from '../features/site-settings/ShiftSettings.tsx';

const parts = [
  ['areas', 'Care areas'],
  ['shifts', 'Shifts'],
  ['rules', 'Planning rules'],
  ['calendar', 'Calendar'],
] as const;
const editorsParts = [
  ['on-call', 'On-call address'],
  ['history', 'History'],
] as const;

/** /sites/:siteId/settings: the site's own rules. `?section` narrows the history. */
export function SiteSettingsPage() {
  const { siteId = '' } = useParams();
  const [search, setSearch] = useSearchParams();
  const permissions = useSession().sites.find(({ id }) => id === siteId)?.permissions ?? [];
  const mayEdit = permissions.includes('site-settings:edit');
  const query = useSiteSettings(siteId);
  const settings = query.data;

  if (!settings) {
    return (
      <div key="loading" className="min-h-dvh">
        <PageHead tab="Site settings" title="Site settings" />
        <div className="page-pad max-w-3xl">
          {query.isError ? (
            <ProblemNotice error={query.error} onRetry={() => void query.refetch()} retrying={query.isFetching} />
          ) : (
            <SkeletonLines lines={8} label="Loading the settings" />
          )}
        </div>
      </div>
    );
  }
  return (
    <>
      <PageHead
        tab="Site settings"
        title={`Settings of ${settings.site.name}`}
        lede={
          <p className="max-w-[58rem]">
            The site’s own rules. A change asks for a new outlook at once; outlooks issued before stay as they were.
          </p>
        }
      />
      <nav aria-label="Parts of the settings" className="page-pad flex flex-wrap gap-x-6">
        {[...parts, ...(mayEdit ? editorsParts : [])].map(([id, name]) => (
          <a key={id} href={`#${id}`} className="link inline-flex min-h-11 items-center font-semibold text-ink2">
            {name}
          </a>
        ))}
      </nav>
      <div key={siteId} className="page-pad grid grid-cols-1 gap-12 pt-4">
        {mayEdit ? null : <Notice title="For looking only">Operations managers change these settings.</Notice>}
        <PanelBoundary className="py-2">
          <AreaSettings settings={settings} mayEdit={mayEdit} />
        </PanelBoundary>
        <PanelBoundary className="py-2">
          <ShiftSettings settings={settings} mayEdit={mayEdit} />
        </PanelBoundary>
        <PanelBoundary className="py-2">
          <RuleSettings settings={settings} mayEdit={mayEdit} />
        </PanelBoundary>
        <PanelBoundary className="py-2">
          <CalendarSettings settings={settings} mayEdit={mayEdit} />
        </PanelBoundary>
        {mayEdit ? (
          <>
            <PanelBoundary className="py-2">
              <OnCallSettings siteId={siteId} />
            </PanelBoundary>
            <PanelBoundary className="py-2">
              <SettingHistory
                siteId={siteId}
                timeZone={settings.site.timeZone}
                section={settingSections.find((section) => section === search.get('section')) ?? null}
                onSection={(section) =>
                  setSearch(section === null ? {} : { section }, { replace: true, preventScrollReset: true })
                }
              />
            </PanelBoundary>
          </>
        ) : null}
      </div>
    </>
  );
}
