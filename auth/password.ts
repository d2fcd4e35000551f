import { hash, verify } from '@node-rs/argon2';
import { COMMON_WORDS, KEY_ROWS } from './common-words';

/** NIST SP 800-63B-4: at least 15 characters where a password is the only factor. */
export const PASSWORD_LENGTH_MIN = 15;
/** Far above 64, and short enough that hashing it costs nothing more. */
export const PASSWORD_LENGTH_MAX = 256;
/** OWASP password storage: Argon2id (the package's default kind) with 19 MiB, two passes, one lane. */
const ARGON2 = { memoryCost: 19_456, timeCost: 2, parallelism: 1 } as const;
/** Letters that must be left once well-known words are taken out. */
const OWN_LETTERS_MIN = 6;

// Equal passwords must be equal however a keyboard composes their accents.
const normal = (password: string) => password.normalize('NFKC');

export const hashPassword = (password: string): Promise<string> => hash(normal(password), ARGON2);

let nobody: Promise<string> | undefined;

/** Whether the password fits. Takes the same time when there is no account or no password yet. */
export async function passwordFits(passwordHash: string | null, password: string): Promise<boolean> {
  nobody ??= hashPassword('a password that nobody has');
  const fits = await verify(passwordHash ?? (await nobody), normal(password).slice(0, PASSWORD_LENGTH_MAX));
  return fits && passwordHash !== null;
}

/**
 * Why a password can't be chosen, in a sentence; null when it can.
 * @param personal name, e-mail and laboratory of the person: words that others would try first.
 */
export function passwordProblem(password: string, personal: readonly string[] = []): string | null {
  const text = normal(password);
  if ([...text].length < PASSWORD_LENGTH_MIN) {
    return `At least ${PASSWORD_LENGTH_MIN} characters: a few words that belong together only for you.`;
  }
  if (text.length > PASSWORD_LENGTH_MAX) return `At most ${PASSWORD_LENGTH_MAX} characters.`;
  const letters = text.toLowerCase().replace(/[^\p{L}\p{N}]/gu, '');
  if (/^(.{0,5}?)\1+$/u.test(letters) || isRow(letters)) {
    return 'This repeats itself or follows the keyboard, and is guessed at once.';
  }
  const words = [
    ...COMMON_WORDS,
    ...personal.flatMap((entry) => entry.toLowerCase().split(/[^\p{L}\p{N}]+/u)),
  ];
  const known = words.filter((word) => word.length >= 4).sort((a, b) => b.length - a.length);
  const own = known.reduce((left, word) => left.replaceAll(word, ''), letters).replace(/\d+/g, '');
  return own.length < OWN_LETTERS_MIN
    ? 'Too little of this is your own: it is made of words that are tried first.'
    : null;
}

/** Whether the letters are runs of neighbouring keys, letters or digits and nothing else. */
function isRow(letters: string): boolean {
  const rows = KEY_ROWS.flatMap((row) => [row + row, [...row].reverse().join('').repeat(2)]);
  let rest = letters;
  while (rest !== '') {
    let length = Math.min(rest.length, 40);
    while (length >= 4 && !rows.some((row) => row.includes(rest.slice(0, length)))) length -= 1;
    if (length < 4) return rest.length < 4 && rest !== letters;
    rest = rest.slice(length);
  }
  return true;
}
