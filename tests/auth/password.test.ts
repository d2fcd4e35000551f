import { describe, expect, it } from 'vitest';
import { COMMON_PASSWORDS } from '@/auth/common-passwords';
import { guessBits } from '@/auth/password-strength';
import { expectWithin } from '../helpers/expect-within';
import { hashPassword, passwordFits, passwordProblem, PASSWORD_LENGTH_MIN } from '@/auth/password';

describe('the list of common passwords', () => {
  it('has more than 3 000 entries, each once, in the form in which they are looked up', () => {
    expect(COMMON_PASSWORDS.length).toBeGreaterThan(3_000);
    expect(new Set(COMMON_PASSWORDS).size).toBe(COMMON_PASSWORDS.length);
    expect(COMMON_PASSWORDS.filter((word) => !/^[a-z0-9]{4,}$/.test(word))).toEqual([]);
  });

  it('makes none of its entries a password, however it is lengthened by years, signs or itself', () => {
    const ways = [
      (word: string) => `${word}-2026!!!!!!!!!!!!!!!`,
      (word: string) => `${word} ${word} ${word} ${word}`,
      (word: string) => `${word[0].toUpperCase()}${word.slice(1)}1234567890123`,
    ];
    const taken = COMMON_PASSWORDS.flatMap((word) => ways.map((way) => way(word))).filter(
      (password) => passwordProblem(password) === null,
    );
    expect(taken).toEqual([]);
  });

  it('is looked through in a moment, for the longest password too', () => {
    const began = performance.now();
    guessBits('abcdefghij klmno pqrst'.repeat(12).slice(0, 256), ['Mira Halvorsen']);
    expect(performance.now() - began).toBeLessThan(1_000);
  });
});

describe('guessing', () => {
  // Seven random letters: 7 log2(26) = 32.9 bits.
  it('counts letters that are no word as what they are', () => {
    expectWithin(guessBits('xqvzkwj'), 7 * Math.log2(26), { abs: 1e-9 });
  });

  it('counts a word of the person less than one that is only common, and that less than a strange one', () => {
    const own = guessBits('butterfly', ['butterfly@lab.test']);
    const common = guessBits('butterfly');
    expect(own < common && common < guessBits('bzttxrfly')).toBe(true);
  });
});

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
    'purple hammer orange guitar lamp',
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
    ['one common password twice', 'mustang-mustang-1'],
    ['two common passwords', 'butterfly liverpool'],
    ['three common passwords', 'monkey dragon shadow 99'],
    ['signs put for letters', 'P@ssw0rd!$unsh1ne!'],
    ['the example of everybody', 'correct horse battery staple'],
    ['a date and a telephone number', '19871224 0170555'],
    ['the field', 'vortexlines-in-helium-laboratory'],
  ])('%s is refused: %j', (_, password) => {
    expect(passwordProblem(password, ['mira.halvorsen@lab.test', 'Mira Halvorsen'])).toMatch(/\.$/);
  });
});
