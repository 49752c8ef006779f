import { z } from 'zod';
import { readMailAddress } from '../domain/mail-address.ts';
import { siteParams } from './common.ts';
import { defineContract } from './contract.ts';

const path = '/api/sites/:siteId/on-call-address';
const setting = z.object({ address: z.string().nullable() });

export const getOnCallAddress = defineContract({
  id: 'getOnCallAddress',
  method: 'get',
  path,
  access: 'site-settings:edit',
  summary: 'Where alert mail of the site goes; null: none is sent.',
  params: siteParams,
  reply: setting,
});

export const setOnCallAddress = defineContract({
  id: 'setOnCallAddress',
  method: 'put',
  path,
  access: 'site-settings:edit',
  summary:
    'Set where alert mail goes when an area passes its alert limit; null sends none. It may be late and is not a pager.',
  params: siteParams,
  body: z.object({
    address: z
      .string()
      .max(254)
      .transform((text, context) => {
        const address = readMailAddress(text);
        if (address !== null) return address;
        context.addIssue({
          code: 'custom',
          message: 'Enter one e-mail address, for instance on-call@hospital.example.',
        });
        return z.NEVER;
      })
      .nullable(),
  }),
  reply: setting,
});
