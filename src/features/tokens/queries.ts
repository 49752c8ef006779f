import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import type { TokenPurpose } from '../../../shared/domain/token-purpose.ts';
import {
  listSiteTokens,
  listTokens,
  makeSiteToken,
  makeToken,
  revokeSiteToken,
  revokeToken,
} from '../../../shared/api/tokens.ts';
import { call } from '../../lib/api-client.ts';

// Without a site the administrator's: every site and purpose.
const tokensKey = (siteId: string | null) => ['tokens', siteId] as const;

/** Tokens, newest first, and the sites that one can be made for (none where the site is given). */
export function useTokens(siteId: string | null) {
  return useQuery({
    queryKey: tokensKey(siteId),
    queryFn: async ({ signal }) =>
      siteId === null
        ? call(listTokens, { signal })
        : { ...(await call(listSiteTokens, { params: { siteId }, signal })), sites: [] },
  });
}

export interface TokenWish {
  siteId: string;
  purpose: TokenPurpose;
  name: string;
}

/** Makes a token; its secret is in the reply and nowhere else, so nothing of it is cached. */
export function useMakeToken(siteId: string | null) {
  const queryClient = useQueryClient();
  return useMutation({
    gcTime: 0,
    mutationFn: (wish: TokenWish) =>
      siteId === null
        ? call(makeToken, { body: wish })
        : call(makeSiteToken, { params: { siteId }, body: { name: wish.name } }),
    onSuccess: () => queryClient.invalidateQueries({ queryKey: tokensKey(siteId) }),
  });
}

export function useRevokeToken(siteId: string | null) {
  const queryClient = useQueryClient();
  return useMutation({
    mutationFn: (tokenId: string) => {
      const kept = 'The token works as before.';
      return siteId === null
        ? call(revokeToken, { params: { tokenId }, kept })
        : call(revokeSiteToken, { params: { siteId, tokenId }, kept });
    },
    onSuccess: () => queryClient.invalidateQueries({ queryKey: tokensKey(siteId) }),
  });
}
