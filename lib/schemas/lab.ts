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

const roles = z
  .array(z.enum(ROLES, `A role is one of ${ROLES.join(', ')}.`))
  .min(1, 'Choose at least one role.')
  .refine(unique, 'Each role once.');

export const rolesPatchSchema = z.strictObject({ roles });

/** RFC 5321, 4.5.3.1.3: a path has at most 256 characters, two of them brackets. */
const EMAIL_LENGTH_MAX = 254;

export const memberCreateSchema = z.strictObject({
  name: nameSchema,
  email: z
    .string('Enter an e-mail address.')
    .trim()
    .max(EMAIL_LENGTH_MAX, `At most ${EMAIL_LENGTH_MAX} characters.`)
    .pipe(z.email('This is not an e-mail address.')),
  roles,
});
export type MemberCreate = z.output<typeof memberCreateSchema>;
