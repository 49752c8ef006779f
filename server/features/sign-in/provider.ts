import * as oidc from 'openid-client';
import type { Config } from '../../config.ts';

/** How long the provider may take for one answer. */
const secondsToAnswer = 10;

// Plain HTTP is for the stand-in on loopback; a production start refuses such an issuer.
// eslint-disable-next-line @typescript-eslint/no-deprecated -- marked so by its authors only to stand out
const allowPlainHttp = oidc.allowInsecureRequests;

/** Finds the identity provider's configuration, once; a failure is not remembered, so that a provider that was down is tried again. */
export function makeProvider(config: Config): () => Promise<oidc.Configuration> {
  let found: Promise<oidc.Configuration> | null = null;
  const plainHttp = config.oidc.issuerUrl.startsWith('http://');
  return () => {
    found ??= oidc
      .discovery(
        new URL(config.oidc.issuerUrl),
        config.oidc.clientId,
        undefined,
        oidc.ClientSecretBasic(config.oidc.clientSecret),
        {
          // An ID token's signature is checked against the provider's keys, though it comes straight from the provider.
          execute: plainHttp ? [allowPlainHttp, oidc.enableNonRepudiationChecks] : [oidc.enableNonRepudiationChecks],
          timeout: secondsToAnswer,
        },
      )
      .catch((error: unknown) => {
        found = null;
        throw error;
      });
    return found;
  };
}
