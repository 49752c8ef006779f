import { describe, expect, it } from 'vitest';
import {
  isGranted,
  permissions,
  permissionsOf,
  roleNames,
  roles,
  type Permission,
} from '../../../shared/domain/permission.ts';

/*
 * The product's table of roles and actions (its own rule, no source outside it), written out by role: the code has it by
 * permission, so that a slip in either shows.
 */
const expected: Record<(typeof roles)[number], Permission[]> = {
  charge: [
    'outlook:read',
    'census:enter',
    'risk:acknowledge',
    'staffed-beds:change-now',
    'scenario:read',
    'brief:read',
  ],
  operations: [
    'outlook:read',
    'census:enter',
    'risk:acknowledge',
    'staffed-beds:change-now',
    'staffed-beds:plan',
    'site-settings:edit',
    'scenario:read',
    'scenario:save',
    'arrival-model:read',
    'arrival-model:fit',
    'arrival-model:approve',
    'brief:read',
    'brief:subscribe',
    'brief:send',
    'audit-log:read-site',
  ],
  steward: [
    'outlook:read',
    'scenario:read',
    'visit-log:read',
    'visit-log:upload',
    'arrival-model:read',
    'arrival-model:fit',
  ],
  executive: ['outlook:read', 'brief:read', 'brief:subscribe'],
  administrator: ['audit-log:read-all', 'installation:administer'],
};

describe('permissions', () => {
  it.each(roles)('of %s', (role) => {
    expect(permissionsOf([role])).toEqual(expected[role]);
    for (const permission of permissions) {
      expect(isGranted([role], permission), permission).toBe(expected[role].includes(permission));
    }
  });

  it('add up over roles, in their own order, each once', () => {
    const both = permissionsOf(['steward', 'charge', 'steward']);
    expect(both).toEqual(permissions.filter((each) => [...expected.steward, ...expected.charge].includes(each)));
    expect(permissionsOf([])).toEqual([]);
    expect(permissionsOf([...roles])).toEqual([...permissions]);
  });

  it('nobody without a role may do anything', () => {
    for (const permission of permissions) expect(isGranted([], permission)).toBe(false);
  });

  it('an administrator reads nothing of a site', () => {
    for (const permission of expected.administrator) expect(permission).toMatch(/^(audit-log:read-all|installation:)/);
  });

  it('every role has a name for the screen', () => {
    expect(new Set(Object.values(roleNames)).size).toBe(roles.length);
  });
});
