import type { Express } from 'express';
import { Brackets } from 'typeorm';
import * as api from '../../../shared/api/people.ts';
import { newId } from '../../database/new-id.ts';
import type { Dependencies } from '../../dependencies.ts';
import { GroupRole } from '../../entities/GroupRole.ts';
import { Membership } from '../../entities/Membership.ts';
import { Person } from '../../entities/Person.ts';
import { badInput, conflict, notFound } from '../../errors.ts';
import { recordAudit } from '../../http/audit.ts';
import { addRoute, type RouteTable } from '../../http/route.ts';
import type { SessionStore } from '../../http/session-store.ts';
import { checkPlace } from './check-place.ts';
import { invitePerson } from './invite-person.ts';
import { keepAnAdministrator } from './keep-administrator.ts';
import { presentGroupRole, presentPeople, readPlaces } from './present.ts';

const most = 200;

/** People and what they may do; the administrator's. */
export function addPeopleRoutes(app: Express, table: RouteTable, deps: Dependencies, sessions: SessionStore): void {
  const { read, write } = deps.database;

  async function presentOne(personId: string, now: number) {
    const person = await read.findOneByOrFail(Person, { id: personId });
    return (await presentPeople(read, [person], await readPlaces(read), now))[0];
  }
  const checkEnd = (endsAt: number | null, now: number) => {
    if (endsAt !== null && endsAt <= now)
      throw badInput('The end was refused.', [{ at: 'endsAt', message: 'The end must lie ahead.' }]);
  };

  addRoute(app, table, deps, api.listPeople, async ({ query: { search }, now }) => {
    const found = read.createQueryBuilder(Person, 'person').orderBy('lower(person.name)').addOrderBy('person.id');
    if (search) {
      found.where(
        new Brackets((either) =>
          either
            .where('instr(lower(person.name), lower(:search)) > 0', { search })
            .orWhere('instr(person.email, lower(:search)) > 0', { search }),
        ),
      );
    }
    const [people, total] = await found.take(most).getManyAndCount();
    const places = await readPlaces(read);
    const groupRoles = await read.find(GroupRole, { order: { claim: 'ASC', id: 'ASC' } });
    return {
      people: await presentPeople(read, people, places, now),
      total,
      groupRoles: groupRoles.map((row) => presentGroupRole(row, places)),
      sites: places.sites,
      groups: places.groups,
    };
  });

  addRoute(app, table, deps, api.getPerson, async ({ params, now }) => {
    const found = await read.findOneBy(Person, { id: params.personId });
    if (!found) throw notFound('This person');
    const places = await readPlaces(read);
    const [person] = await presentPeople(read, [found], places, now);
    return { person, sites: places.sites, groups: places.groups };
  });

  addRoute(app, table, deps, api.invitePerson, async (context) => {
    const { person, mailed } = await invitePerson(deps, context, context.body);
    return { person: await presentOne(person.id, context.now), mailed };
  });

  addRoute(app, table, deps, api.withdrawInvitation, async (context) => {
    const { personId } = context.params;
    await write(async (manager) => {
      const person = await manager.findOneBy(Person, { id: personId });
      if (!person) throw notFound('This person');
      if (person.issuer !== null)
        throw conflict(`${person.name} has signed in and stays in the records.`, 'Take the roles away instead.');
      await manager.delete(Membership, { personId });
      await manager.delete(Person, { id: personId });
      await recordAudit(manager, context, 'person.invitation-withdrawn', personId);
    });
    return null;
  });

  addRoute(app, table, deps, api.giveRole, async (context) => {
    const { params, now, body } = context;
    const { role, siteId, groupId, endsAt } = body;
    await checkPlace(read, role, body);
    checkEnd(endsAt, now);
    await write(async (manager) => {
      if (!(await manager.existsBy(Person, { id: params.personId }))) throw notFound('This person');
      const same = (await manager.findBy(Membership, { personId: params.personId, role })).some(
        (held) => held.siteId === siteId && held.groupId === groupId && (held.endsAt === null || held.endsAt > now),
      );
      if (same) throw conflict('The person holds this role there already.', 'Change its end if it should last longer.');
      const id = newId();
      const { personId } = params;
      await manager.insert(Membership, { id, personId, role, siteId, groupId, endsAt, createdAt: now });
      await recordAudit(manager, context, 'role.given', id, { personId, role, siteId, groupId, endsAt });
    });
    return presentOne(params.personId, now);
  });

  addRoute(app, table, deps, api.changeRoleEnd, async (context) => {
    const { personId, roleId } = context.params;
    const { endsAt } = context.body;
    checkEnd(endsAt, context.now);
    await write(async (manager) => {
      const held = await manager.findOneBy(Membership, { id: roleId, personId });
      if (!held) throw notFound('This role');
      if (endsAt !== null) await keepAnAdministrator(manager, held);
      await manager.update(Membership, { id: roleId }, { endsAt });
      const { role, siteId, groupId } = held;
      await recordAudit(manager, context, 'role.end-changed', roleId, { personId, role, siteId, groupId, endsAt });
    });
    return presentOne(personId, context.now);
  });

  addRoute(app, table, deps, api.removeRole, async (context) => {
    const { personId, roleId } = context.params;
    await write(async (manager) => {
      const held = await manager.findOneBy(Membership, { id: roleId, personId });
      if (!held) throw notFound('This role');
      await keepAnAdministrator(manager, held);
      await manager.delete(Membership, { id: roleId });
      const { role, siteId, groupId } = held;
      await recordAudit(manager, context, 'role.taken-away', roleId, { personId, role, siteId, groupId });
    });
    return presentOne(personId, context.now);
  });

  addRoute(app, table, deps, api.endSessions, async (context) => {
    const { personId } = context.params;
    if (!(await read.existsBy(Person, { id: personId }))) throw notFound('This person');
    const ended = await sessions.endAllOf(personId, (manager, count) =>
      recordAudit(manager, context, 'person.sessions-ended', personId, { sessions: count }),
    );
    return { ended };
  });

  addRoute(app, table, deps, api.makeGroupRole, async (context) => {
    const { claim, role, siteId, groupId } = context.body;
    await checkPlace(read, role, context.body);
    const row = await write(async (manager) => {
      const same = (await manager.findBy(GroupRole, { claim, role })).some(
        (rule) => rule.siteId === siteId && rule.groupId === groupId,
      );
      if (same) throw conflict('The same rule is there already.', 'Nothing more to do.');
      const createdBy = context.caller?.person.name ?? '';
      const created = await manager.save(
        manager.create(GroupRole, { id: newId(), claim, role, siteId, groupId, createdBy, createdAt: context.now }),
      );
      await recordAudit(manager, context, 'group-role.made', created.id, { claim, role, siteId, groupId });
      return created;
    });
    return presentGroupRole(row, await readPlaces(read));
  });

  addRoute(app, table, deps, api.removeGroupRole, async (context) => {
    const { groupRoleId } = context.params;
    await write(async (manager) => {
      const rule = await manager.findOneBy(GroupRole, { id: groupRoleId });
      if (!rule) throw notFound('This rule');
      await manager.delete(GroupRole, { id: groupRoleId });
      const { claim, role, siteId, groupId } = rule;
      await recordAudit(manager, context, 'group-role.removed', groupRoleId, { claim, role, siteId, groupId });
    });
    return null;
  });
}
