import { hash, verify } from '@node-rs/argon2';
import { guessBits } from './password-strength';

/** NIST SP 800-63B-4: at least 15 characters where a password is the only factor. */
export const PASSWORD_LENGTH_MIN = 15;
/** Far above 64, and short enough that hashing it costs nothing more. */
export const PASSWORD_LENGTH_MAX = 256;
/** OWASP password storage: Argon2id (the package's default kind) with 19 MiB, two passes, one lane. */
const ARGON2 = { memoryCost: 19_456, timeCost: 2, parallelism: 1 } as const;
/** What must be left to guess, bits: seven random letters, or several words that are not the first to be tried. */
const BITS_MIN = 32;

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
  return guessBits(text, personal) < BITS_MIN
    ? 'Too easy to guess: words and names that are tried first, repetitions, or runs of keys. Put in more of your own.'
    : null;
}
