import { useState } from 'react';
import { useParams } from 'react-router-dom';
import type { MadeToken } from '../../shared/api/tokens.ts';
import { ProblemNotice } from '../components/Notice.tsx';
import { PageHead } from '../components/PageHead.tsx';
import { SkeletonLines } from '../components/Skeleton.tsx';
import { useSession } from '../features/sign-in/session.ts';
import { MakeToken } from '../features/tokens/MakeToken.tsx';
import { useMakeToken, useRevokeToken, useTokens } from '../features/tokens/queries.ts';
import { SecretOnce } from '../components/SecretOnce.tsx';
import { TokenList } from '../features/tokens/TokenList.tsx';
import { formatCount } from '../lib/format.ts';

/** /tokens: every site's, the administrator's; /sites/:siteId/tokens: those for upload, the steward's. */
export function TokensPage() {
  const { siteId = null } = useParams();
  const site = useSession().sites.find(({ id }) => id === siteId);
  const timeZone = site?.timeZone ?? Intl.DateTimeFormat().resolvedOptions().timeZone;
  const query = useTokens(siteId);
  const make = useMakeToken(siteId);
  const revoke = useRevokeToken(siteId);
  const [made, setMade] = useState<MadeToken | null>(null);
  const inUse = query.data?.tokens.filter(({ revokedAt }) => revokedAt === null).length;
  return (
    <>
      <PageHead
        tab="Tokens"
        title={inUse === undefined ? 'Machine tokens' : `${formatCount(inUse, 'machine token')} in use`}
        lede={
          <p className="max-w-[58rem]">
            {siteId === null
              ? 'A token lets one system of a site enter its census or upload its visit logs, without a person signed in. It reads nothing.'
              : 'A token lets a system of this site upload visit logs each night, without a person signed in. It reads nothing.'}
          </p>
        }
      />
      <div className="page-pad grid gap-8 pt-2">
        {made ? (
          <SecretOnce
            title={`The token for “${made.token.name}” is made. Copy its secret now: it is not shown again.`}
            label="Secret"
            secret={made.secret}
            copyText="Copy the secret"
            onKept={() => setMade(null)}
          >
            The system sends it with every call, in the header <code>Authorization: Bearer</code>. Whoever has it can
            send data in this site’s name: keep it as you keep a password.
          </SecretOnce>
        ) : null}
        {query.error && !query.data ? (
          <ProblemNotice error={query.error} onRetry={() => void query.refetch()} retrying={query.isFetching} />
        ) : null}
        {query.isPending ? <SkeletonLines lines={4} label="Loading the list of tokens" /> : null}
        {query.data ? (
          <>
            <TokenList
              tokens={query.data.tokens}
              withSites={siteId === null}
              timeZone={timeZone}
              revoking={revoke.isPending}
              error={revoke.error}
              onRevoke={(tokenId, done) => revoke.mutate(tokenId, { onSuccess: done })}
            />
            <section className="grid gap-4" aria-labelledby="make-token">
              <h2 id="make-token" className="text-section">
                Make a token
              </h2>
              <MakeToken
                siteId={siteId}
                sites={query.data.sites}
                making={make.isPending}
                error={make.error}
                onMake={(wish, done) =>
                  make.mutate(wish, {
                    onSuccess: (reply) => {
                      done();
                      setMade(reply);
                      // The secret must not linger in the mutation's result.
                      make.reset();
                    },
                  })
                }
              />
            </section>
          </>
        ) : null}
      </div>
    </>
  );
}
