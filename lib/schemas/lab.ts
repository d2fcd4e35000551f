import { z } from 'zod';
import { ROLES, SCOPES } from '../access';
import { nameSchema } from './text';

const unique = (list: readonly string[]) => new Set(list).size === list.length;

export const tokenCreateSchema = z.strictObject({
  name: nameSchema,
  /** All that the person's roles allow, when left out. */
  scopes: z
    .array(z.enum(SCOPES, `A scope is one of ${SCOPES.join(', ')}.`))
    .min(1, 'Choose at least one scope.')
    .refine(unique, 'Each scope once.')
    .optional(),
});

export const rolesPatchSchema = z.strictObject({
  roles: z
    .array(z.enum(ROLES, `A role is one of ${ROLES.join(', ')}.`))
    .min(1, 'Choose at least one role.')
    .refine(unique, 'Each role once.'),
});
