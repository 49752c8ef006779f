import { z } from 'zod';
import { areaFaults } from '../domain/area-faults.ts';
import { id } from './common.ts';
import { defineContract } from './contract.ts';

const name = z.string().trim().min(2, 'At least 2 characters').max(80, 'At most 80 characters');

export const areaBody = z.object({
  name,
  spaceKind: z.enum(['bed', 'chair']),
  spaces: z.int('Whole numbers only').min(0, 'Not below 0').max(500, 'At most 500'),
  safeMinimum: z.int('Whole numbers only').min(0, 'Not below 0').max(500, 'At most 500'),
  bedStep: z.int('Whole numbers only').min(1, 'At least 1').max(50, 'At most 50'),
  noticeHours: z.number('Enter hours').min(0, 'Not below 0').max(720, 'At most 720 hours'),
});
export type AreaBody = z.infer<typeof areaBody>;

const oneArea = areaBody.superRefine((area, context) => {
  for (const { field, message } of areaFaults([area])) context.addIssue({ code: 'custom', path: [field], message });
});

const place = {
  name,
  groupId: id,
  /** IANA name. */
  timeZone: z.string().min(1, 'Choose the time zone').max(64),
  /** ISO 3166-1 alpha-2, for public holidays. */
  country: z.string().regex(/^[A-Z]{2}$/, 'Choose the country'),
  region: z.string().min(1).max(12).nullable(),
};

export const siteBody = z
  .object({ ...place, areas: z.array(areaBody).min(1, 'Name at least one care area').max(40, 'At most 40 areas') })
  .superRefine(({ areas }, context) => {
    for (const { index, field, message } of areaFaults(areas))
      context.addIssue({ code: 'custom', path: ['areas', index, field], message });
  });
export type SiteBody = z.infer<typeof siteBody>;

export const installationSite = z.object({
  id,
  ...place,
  groupName: z.string(),
  areas: z.array(areaBody.extend({ id })),
  /** Visit logs or outlooks stand on its time zone, which then stays. */
  hasData: z.boolean(),
  /** How many people hold a role at it now, and whether an operations manager is among them. */
  people: z.int(),
  hasOperations: z.boolean(),
});
export type InstallationSite = z.infer<typeof installationSite>;

const base = '/api/installation';
const access = 'installation:administer';

export const listInstallationSites = defineContract({
  id: 'listInstallationSites',
  method: 'get',
  path: `${base}/sites`,
  access,
  summary: 'Groups and sites of the installation with their care areas; no operational data.',
  reply: z.object({ groups: z.array(z.object({ id, name: z.string() })), sites: z.array(installationSite) }),
});

export const getPlaceChoices = defineContract({
  id: 'getPlaceChoices',
  method: 'get',
  path: `${base}/places`,
  access,
  summary: 'Time zones (IANA), and countries with regions (ISO 3166) whose public holidays are known.',
  reply: z.object({
    timeZones: z.array(z.string()),
    countries: z.array(
      z.object({
        code: z.string(),
        name: z.string(),
        regions: z.array(z.object({ code: z.string(), name: z.string() })),
      }),
    ),
  }),
});

export const makeGroup = defineContract({
  id: 'makeGroup',
  method: 'post',
  path: `${base}/groups`,
  access,
  summary: 'Make a health group: sites under one management.',
  body: z.object({ name }),
  status: 201,
  reply: z.object({ id, name: z.string() }),
});

export const renameGroup = defineContract({
  id: 'renameGroup',
  method: 'put',
  path: `${base}/groups/:groupId`,
  access,
  summary: 'Rename a health group.',
  params: z.object({ groupId: id }),
  body: z.object({ name }),
  reply: z.object({ id, name: z.string() }),
});

export const makeSite = defineContract({
  id: 'makeSite',
  method: 'post',
  path: `${base}/sites`,
  access,
  summary:
    'Make a site with its care areas. It begins with two shifts of twelve hours, which its operations manager sets.',
  body: siteBody,
  status: 201,
  reply: installationSite,
});

const oneSite = z.object({ id });

export const changeSite = defineContract({
  id: 'changeSite',
  method: 'put',
  path: `${base}/sites/:id`,
  access,
  summary: 'Change a site’s name, group, country or region; its time zone only while no data stands on it.',
  params: oneSite,
  body: z.object(place),
  reply: installationSite,
});

export const addArea = defineContract({
  id: 'addArea',
  method: 'post',
  path: `${base}/sites/:id/areas`,
  access,
  summary: 'Add a care area to a site.',
  params: oneSite,
  body: oneArea,
  status: 201,
  reply: installationSite,
});

export const changeArea = defineContract({
  id: 'changeArea',
  method: 'put',
  path: `${base}/sites/:id/areas/:areaId`,
  access,
  summary: 'Change a care area: its name, the spaces that exist, its safe minimum, step and notice.',
  params: oneSite.extend({ areaId: id }),
  body: oneArea,
  reply: installationSite,
});

export const removeArea = defineContract({
  id: 'removeArea',
  method: 'delete',
  path: `${base}/sites/:id/areas/:areaId`,
  access,
  summary: 'Remove a care area that nothing was stored for yet.',
  params: oneSite.extend({ areaId: id }),
  reply: installationSite,
});

export const orderAreas = defineContract({
  id: 'orderAreas',
  method: 'put',
  path: `${base}/sites/:id/area-order`,
  access,
  summary: 'Set the order in which a site names its care areas; every area once. No figure moves.',
  params: oneSite,
  body: z.object({
    areaIds: z
      .array(id)
      .min(1, 'Name every care area')
      .max(500)
      .refine((ids) => new Set(ids).size === ids.length, 'A care area is named twice'),
  }),
  reply: installationSite,
});
