import { z } from 'zod';
import { readMailAddress } from '../domain/mail-address.ts';
import { roles } from '../domain/permission.ts';
import { id, instant } from './common.ts';
import { defineContract } from './contract.ts';

const role = z.enum(roles);

/** Where a role holds: at a site, over a health group, or (both null) for the installation. */
const place = { siteId: id.nullable(), groupId: id.nullable() };
const shownPlace = { ...place, placeName: z.string() };

export const heldRole = z.object({ id, role, ...shownPlace, endsAt: instant.nullable(), ended: z.boolean() });
export type HeldRole = z.infer<typeof heldRole>;

export const groupRole = z.object({
  id,
  /** The group's name in the provider's groups claim. */
  claim: z.string(),
  role,
  ...shownPlace,
  createdBy: z.string(),
  createdAt: instant,
});
export type GroupRole = z.infer<typeof groupRole>;

export const person = z.object({
  id,
  name: z.string(),
  email: z.string(),
  /** False until the provider has verified the address: it then proves nothing. */
  emailVerified: z.boolean(),
  /** Null: invited, never signed in. */
  lastSignInAt: instant.nullable(),
  roles: z.array(heldRole),
  /** Roles that the provider's groups bring, by the mapping. */
  byGroups: z.array(groupRole),
  /** The provider's groups at the last sign-in. */
  identityGroups: z.array(z.string()),
  /** Browsers signed in now. */
  sessions: z.int(),
});
export type PersonReply = z.infer<typeof person>;

const choices = {
  sites: z.array(z.object({ id, name: z.string(), timeZone: z.string() })),
  groups: z.array(z.object({ id, name: z.string() })),
};

export const listPeople = defineContract({
  id: 'listPeople',
  method: 'get',
  path: '/api/people',
  access: 'installation:administer',
  summary: 'People who signed in or were invited, with their roles; by name, 200 at most.',
  query: z.object({ search: z.string().trim().max(80).optional() }),
  reply: z.object({ people: z.array(person), total: z.int(), groupRoles: z.array(groupRole), ...choices }),
});

const address = z
  .string()
  .max(254)
  .transform((text, context) => {
    const read = readMailAddress(text);
    if (read !== null) return read.toLowerCase();
    context.addIssue({ code: 'custom', message: 'Enter one e-mail address, as the hospital account has it.' });
    return z.NEVER;
  });

export const invitePerson = defineContract({
  id: 'invitePerson',
  method: 'post',
  path: '/api/people',
  access: 'installation:administer',
  summary: 'Name somebody by address before the first sign-in, which binds them if the provider verified the address.',
  body: z.object({ email: address, name: z.string().trim().min(2, 'At least 2 characters').max(120) }),
  status: 201,
  reply: z.object({ person, mailed: z.boolean() }),
});

const personParams = z.object({ personId: id });
export const getPerson = defineContract({
  id: 'getPerson',
  method: 'get',
  path: '/api/people/:personId',
  access: 'installation:administer',
  summary: 'One person with every role held now or before, and the places where one can be given.',
  params: personParams,
  reply: z.object({ person, ...choices }),
});

const roleParams = personParams.extend({ roleId: id });

export const withdrawInvitation = defineContract({
  id: 'withdrawInvitation',
  method: 'delete',
  path: '/api/people/:personId',
  access: 'installation:administer',
  summary: 'Withdraw an invitation with its roles; somebody who has signed in stays.',
  params: personParams,
  status: 204,
  reply: z.null(),
});

export const giveRole = defineContract({
  id: 'giveRole',
  method: 'post',
  path: '/api/people/:personId/roles',
  access: 'installation:administer',
  summary: 'Give a role: at a site, over a group (executive), or for the installation (administrator).',
  params: personParams,
  body: z.object({ role, ...place, endsAt: instant.nullable() }),
  status: 201,
  reply: person,
});

export const changeRoleEnd = defineContract({
  id: 'changeRoleEnd',
  method: 'put',
  path: '/api/people/:personId/roles/:roleId',
  access: 'installation:administer',
  summary: 'Set when a role ends; null: no end.',
  params: roleParams,
  body: z.object({ endsAt: instant.nullable() }),
  reply: person,
});

export const removeRole = defineContract({
  id: 'removeRole',
  method: 'delete',
  path: '/api/people/:personId/roles/:roleId',
  access: 'installation:administer',
  summary: 'Take a role away; it is refused from the next request on.',
  params: roleParams,
  reply: person,
});

export const endSessions = defineContract({
  id: 'endSessions',
  method: 'post',
  path: '/api/people/:personId/sign-out',
  access: 'installation:administer',
  summary: 'End every session of a person.',
  params: personParams,
  reply: z.object({ ended: z.int() }),
});

export const makeGroupRole = defineContract({
  id: 'makeGroupRole',
  method: 'post',
  path: '/api/group-roles',
  access: 'installation:administer',
  summary: 'Give a role to everybody in a group of the identity provider.',
  body: z.object({ claim: z.string().trim().min(1, 'Enter the group’s name').max(200), role, ...place }),
  status: 201,
  reply: groupRole,
});

export const removeGroupRole = defineContract({
  id: 'removeGroupRole',
  method: 'delete',
  path: '/api/group-roles/:groupRoleId',
  access: 'installation:administer',
  summary: 'Remove such a rule; the role is refused from the next request on.',
  params: z.object({ groupRoleId: id }),
  status: 204,
  reply: z.null(),
});
