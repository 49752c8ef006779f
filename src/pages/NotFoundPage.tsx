import { paths } from '../app/paths.ts';
import { ButtonLink } from '../components/Button.tsx';
import { PageHead } from '../components/PageHead.tsx';

/** An address that leads nowhere, or to a site at which the person holds no role: both look the same on purpose. */
export function NotFoundPage() {
  return (
    <div>
      <PageHead
        tab="Not found"
        title="There is no such page."
        lede="The address may be mistyped, or it belongs to a site at which you have no role."
      />
      <div className="page-pad">
        <ButtonLink to={paths.home()}>Go to the first page</ButtonLink>
      </div>
    </div>
  );
}
