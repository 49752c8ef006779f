import { randomBytes } from 'node:crypto';
import { withArticle } from '../../../shared/domain/identifier-kind.ts';
import { screenNote } from '../../../shared/domain/screen-note.ts';
import type { TokenPurpose } from '../../../shared/domain/token-purpose.ts';
import { newId } from '../../database/new-id.ts';
import type { Dependencies } from '../../dependencies.ts';
import { MachineToken } from '../../entities/MachineToken.ts';
import type { Site } from '../../entities/Site.ts';
import { badInput } from '../../errors.ts';
import { recordAudit, type AuditSource } from '../../http/audit.ts';
import { hashSecret } from '../../http/machine-token.ts';

/** Begins every secret, so that one that was pasted into a file or a message can be found again. */
const prefix = 'shoalmark_';

/** Makes a token of 256 random bits; only its digest is stored. */
export async function makeToken(
  deps: Dependencies,
  context: Omit<AuditSource, 'site'>,
  site: Site,
  { purpose, name }: { purpose: TokenPurpose; name: string },
): Promise<{ token: MachineToken; secret: string }> {
  const kind = screenNote(name);
  if (kind !== null) {
    throw badInput('The name was refused.', [
      { at: 'name', message: `This looks like ${withArticle(kind)}. Name the system that will use the token.` },
    ]);
  }
  const secret = prefix + randomBytes(32).toString('base64url');
  const id = newId();
  const token = await deps.database.write(async (manager) => {
    await manager.insert(MachineToken, {
      id,
      siteId: site.id,
      purpose,
      name,
      secretHash: hashSecret(secret),
      createdBy: context.caller?.person.name ?? '',
      createdAt: context.now,
      lastUsedAt: null,
      revokedAt: null,
    });
    await recordAudit(manager, { ...context, site }, 'token.made', id, { purpose, name });
    return manager.findOneByOrFail(MachineToken, { id });
  });
  return { token, secret };
}
