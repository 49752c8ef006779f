import { Notice } from '../../components/Notice.tsx';
import { useComparison } from './queries.ts';

/** What the comparison with the model in use says, in a few sentences, beside the button that approves. */
export function ComparisonVerdict({ siteId, modelId }: { siteId: string; modelId: string }) {
  const query = useComparison(siteId, modelId);
  if (!query.data) return null;
  const { comparison, mayCompare } = query.data;
  const words = comparison?.result?.words;
  if (comparison?.status === 'running') return <p className="text-ink2">The comparison with the model in use runs.</p>;
  if (!words) {
    return mayCompare ? (
      <Notice kind="caution" title="Not compared with the model in use yet.">
        <p>Try both on past weeks first, under “Beside the model in use”.</p>
      </Notice>
    ) : null;
  }
  return (
    <Notice
      kind={comparison.stillInUse ? 'note' : 'caution'}
      title={comparison.stillInUse ? words.headline : 'Compared with a model that is no longer in use.'}
    >
      <p>{comparison.stillInUse ? words.ranges : words.headline}</p>
      <p>{words.grounds}</p>
    </Notice>
  );
}
