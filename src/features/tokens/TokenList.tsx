import { useState } from 'react';
import type { MachineToken } from '../../../shared/api/tokens.ts';
import { tokenPurposeNames } from '../../../shared/domain/token-purpose.ts';
import { Button } from '../../components/Button.tsx';
import { DataTable } from '../../components/DataTable.tsx';
import { Dialog } from '../../components/Dialog.tsx';
import { ProblemNotice } from '../../components/Notice.tsx';
import { formatDate, formatDateTime } from '../../lib/format.ts';

/** Every token with its last use, and where it can be revoked. */
export function TokenList({
  tokens,
  withSites,
  timeZone,
  revoking,
  error,
  onRevoke,
}: {
  tokens: readonly MachineToken[];
  withSites: boolean;
  timeZone: string;
  revoking: boolean;
  error: unknown;
  /** Calls `done` once it is revoked. */
  onRevoke: (tokenId: string, done: () => void) => void;
}) {
  const [asked, setAsked] = useState<MachineToken | null>(null);
  return (
    <>
      <DataTable
        caption="Machine tokens"
        captionHidden
        rows={tokens}
        rowKey={(token) => token.id}
        empty="No token was ever made."
        columns={[
          { key: 'name', header: 'System', rowHeader: true, cell: (token) => token.name },
          ...(withSites ? [{ key: 'site', header: 'Site', cell: (token: MachineToken) => token.siteName }] : []),
          { key: 'purpose', header: 'Lets it', cell: (token) => tokenPurposeNames[token.purpose] },
          {
            key: 'made',
            header: 'Made',
            cell: (token) => (
              <span className="text-ink2">
                {formatDate(token.createdAt, timeZone)}, {token.createdBy}
              </span>
            ),
          },
          {
            key: 'used',
            header: 'Last used',
            cell: (token) => (token.lastUsedAt === null ? 'Never' : formatDateTime(token.lastUsedAt, timeZone)),
          },
          {
            key: 'revoke',
            header: 'State',
            cell: (token) =>
              token.revokedAt === null ? (
                <Button look="quiet" aria-label={`Revoke “${token.name}”`} onClick={() => setAsked(token)}>
                  Revoke
                </Button>
              ) : (
                `Revoked ${formatDate(token.revokedAt, timeZone)}`
              ),
          },
        ]}
      />
      <Dialog title={`Revoke “${asked?.name ?? ''}”?`} open={asked !== null} onClose={() => setAsked(null)}>
        <div className="grid gap-4">
          <p className="text-ink2">
            The system that uses it is refused from its next call on. This cannot be undone; a new token can be made.
          </p>
          {error ? <ProblemNotice error={error} /> : null}
          <Button
            className="justify-self-start"
            busy={revoking}
            busyText="Revoking…"
            onClick={() => {
              if (asked) onRevoke(asked.id, () => setAsked(null));
            }}
          >
            Revoke the token
          </Button>
        </div>
      </Dialog>
    </>
  );
}
