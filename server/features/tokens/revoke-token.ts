import type { FindOptionsWhere } from 'typeorm';
import type { Dependencies } from '../../dependencies.ts';
import { MachineToken } from '../../entities/MachineToken.ts';
import { Site } from '../../entities/Site.ts';
import { conflict, notFound } from '../../errors.ts';
import { recordAudit, type AuditSource } from '../../http/audit.ts';

/** Revokes the token that fits, for good. 404 if none does, 409 if it was revoked before. */
export function revokeToken(
  deps: Dependencies,
  context: Omit<AuditSource, 'site'>,
  where: FindOptionsWhere<MachineToken>,
): Promise<{ token: MachineToken; site: Site }> {
  return deps.database.write(async (manager) => {
    const token = await manager.findOneBy(MachineToken, where);
    if (!token) throw notFound('This token');
    if (token.revokedAt !== null) throw conflict('This token was revoked before.', 'Nothing more to do.');
    token.revokedAt = context.now;
    await manager.update(MachineToken, { id: token.id }, { revokedAt: context.now });
    const site = await manager.findOneByOrFail(Site, { id: token.siteId });
    const { purpose, name } = token;
    await recordAudit(manager, { ...context, site }, 'token.revoked', token.id, { purpose, name });
    return { token, site };
  });
}
