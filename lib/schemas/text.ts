import { z } from 'zod';

// Control marks, and marks that turn the reading direction or take no room: names must read as stored.

const HIDDEN_MARKS = /[\u0000-\u001f\u007f-\u009f\u200b-\u200f\u202a-\u202e\u2060-\u2069\ufeff]/;

const HIDDEN_IN_TEXT =
  /[\u0000-\u0008\u000b\u000c\u000e-\u001f\u007f-\u009f\u202a-\u202e\u2066-\u2069\ufeff]/;

export const NAME_LENGTH_MAX = 200;

/** A name of one line: 1 to 200 characters, no hidden marks. */
export const nameSchema = z
  .string('Enter a name.')
  .trim()
  .min(1, 'Enter a name.')
  .max(NAME_LENGTH_MAX, `At most ${NAME_LENGTH_MAX} characters.`)
  .refine((name) => !HIDDEN_MARKS.test(name), 'Hidden or control characters are not accepted in names.');

/** Free text of several lines. */
export const noteSchema = z
  .string()
  .trim()
  .max(20_000, 'At most 20,000 characters.')
  .refine((text) => !HIDDEN_IN_TEXT.test(text), 'Hidden or control characters are not accepted.');

export const tagsSchema = z
  .array(nameSchema.pipe(z.string().max(60, 'A tag has at most 60 characters.')))
  .max(30, 'At most 30 tags.');
