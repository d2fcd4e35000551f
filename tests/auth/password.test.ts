import { describe, expect, it } from 'vitest';
import { hashPassword, passwordFits, passwordProblem, PASSWORD_LENGTH_MIN } from '@/auth/password';

describe('passwords', () => {
  it('are stored as Argon2id with 19 MiB, two passes, one lane', async () => {
    // OWASP Password Storage Cheat Sheet: m=19456, t=2, p=1.
    expect(await hashPassword('quiet otters sing at noon')).toMatch(/^\$argon2id\$v=19\$m=19456,t=2,p=1\$/);
  });

  it('fit only themselves, and never an account without one', async () => {
    const stored = await hashPassword('quiet otters sing at noon');
    expect(await passwordFits(stored, 'quiet otters sing at noon')).toBe(true);
    expect(await passwordFits(stored, 'quiet otters sing at noo')).toBe(false);
    expect(await passwordFits(null, 'a password that nobody has')).toBe(false);
  });

  it('fit however a keyboard composes their accents', async () => {
    const stored = await hashPassword('caf\u00e9 caf\u00e9 tilbury lamp');
    expect(await passwordFits(stored, 'cafe\u0301 cafe\u0301 tilbury lamp')).toBe(true);
  });

  // NIST SP 800-63B-4: at least 15 characters as the only factor, no rules of composition, long ones accepted.
  it.each([
    'quiet otters sing at noon',
    'x7!Lq-pW2 mmb=Rt',
    'ein kahler Ast am Weg',
    '七転び八起き 猿も木から落ちる 花より団子',
    'w'.padEnd(5, 'oy') + ' lantern ferry moss '.repeat(4),
  ])('%j is accepted', (password) => expect(passwordProblem(password)).toBeNull());
  it.each([
    ['short', 'fourteen chars'.slice(0, PASSWORD_LENGTH_MIN - 1)],
    ['one letter', 'a'.repeat(20)],
    ['a repetition', 'abcabcabcabcabcabc'],
    ['rows of keys', 'qwertyuiopasdfghjkl'],
    ['counting', '1234567890123456'],
    ['common words', 'passwordpassword1'],
    ['common words', 'Welcome-Superfluid-Helium-2026'],
    ['the person', 'mira.halvorsen-2026!'],
  ])('%s is refused: %j', (_, password) => {
    expect(passwordProblem(password, ['mira.halvorsen@lab.test', 'Mira Halvorsen'])).toMatch(/\.$/);
  });
});
