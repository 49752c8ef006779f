import type { MachineToken } from '../entities/MachineToken.ts';
import type { Caller } from './caller.ts';

/** Who does something: a person, or a site's own system by its token. */
export interface Actor {
  /** Of the person or of the token. */
  id: string;
  /** As records and the audit trail name it. */
  name: string;
}

/** Who acts in a request; null where nobody is known. */
export function actorOf({ caller, token }: { caller: Caller | null; token?: MachineToken | null }): Actor | null {
  if (token) return { id: token.id, name: `Machine token “${token.name}”` };
  return caller ? { id: caller.person.id, name: caller.person.name } : null;
}
