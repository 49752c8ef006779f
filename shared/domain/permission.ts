/** The roles a person may hold, always at a site, a health group or the installation. */
export const roles = ['charge', 'operations', 'steward', 'executive', 'administrator'] as const;
export type Role = (typeof roles)[number];

/** What each role is called on screen. */
export const roleNames: Record<Role, string> = {
  charge: 'Charge nurse',
  operations: 'Operations manager',
  steward: 'Data steward',
  executive: 'Executive',
  administrator: 'Administrator',
};

/** Everything the server may be asked to do; the table below says who may. */
export const permissions = [
  'outlook:read',
  'census:enter',
  'risk:acknowledge',
  'staffed-beds:change-now',
  'staffed-beds:plan',
  'site-settings:edit',
  'scenario:read',
  'scenario:save',
  'visit-log:read',
  'visit-log:upload',
  'arrival-model:read',
  'arrival-model:fit',
  'arrival-model:approve',
  'brief:read',
  'brief:subscribe',
  'brief:send',
  'audit-log:read-site',
  'audit-log:read-all',
  'installation:administer',
] as const;
export type Permission = (typeof permissions)[number];

/**
 * Who may do what. An administrator reads no operational data by that role alone.
 * `visit-log:read` (batches and their status, never visit rows) is the steward's; operations
 * managers read a model's lineage through `arrival-model:read`.
 */
const granted: Record<Permission, readonly Role[]> = {
  'outlook:read': ['charge', 'operations', 'steward', 'executive'],
  'census:enter': ['charge', 'operations'],
  'risk:acknowledge': ['charge', 'operations'],
  'staffed-beds:change-now': ['charge', 'operations'],
  'staffed-beds:plan': ['operations'],
  'site-settings:edit': ['operations'],
  'scenario:read': ['charge', 'operations', 'steward'],
  'scenario:save': ['operations'],
  'visit-log:read': ['steward'],
  'visit-log:upload': ['steward'],
  'arrival-model:read': ['operations', 'steward'],
  'arrival-model:fit': ['operations', 'steward'],
  'arrival-model:approve': ['operations'],
  'brief:read': ['charge', 'operations', 'executive'],
  'brief:subscribe': ['operations', 'executive'],
  'brief:send': ['operations'],
  'audit-log:read-site': ['operations'],
  'audit-log:read-all': ['administrator'],
  'installation:administer': ['administrator'],
};

/** True when any of the roles held carries the permission. */
export function isGranted(held: readonly Role[], permission: Permission): boolean {
  return granted[permission].some((role) => held.includes(role));
}

/** The permissions that a set of roles carries, in the order of `permissions`. */
export function permissionsOf(held: readonly Role[]): Permission[] {
  return permissions.filter((permission) => isGranted(held, permission));
}
