import { COMMON_PASSWORDS } from './common-passwords';
import { COMMON_WORDS, KEY_ROWS } from './common-words';

/** Shorter pieces are no words: they stand in almost every text. */
const WORD_LENGTH_MIN = 4;

/**
 * What a piece adds to the guessing of who knows our field and the person, in bits: about the logarithm of how many
 * others of its kind would be tried before it. Common practice, no source; random letters count as what they are.
 */
const BITS = {
  letter: Math.log2(26),
  /** Numbers that people choose are dates and telephones. */
  digit: 1.5,
  /** Outside of ASCII: scripts with many signs, or accents that few guess. */
  other: 8,
  ofTheField: 4,
  ofThePerson: 2,
  keyRun: 4,
  again: 1,
} as const;

// The place in the list is how many are tried before; one bit more for how it is written.
const RANKED: ReadonlyMap<string, number> = new Map(
  COMMON_PASSWORDS.map((word, place) => [word, Math.log2(place + 2) + 1]),
);
const OF_THE_FIELD = new Set(COMMON_WORDS);
// Twice, so that a run may go round; one text, so that one search looks through all.
const ROWS = KEY_ROWS.flatMap((row) => [row.repeat(2), [...row].reverse().join('').repeat(2)]).join(' ');
const LONGEST_PIECE = 26;

/** Signs that people put for letters. */
const INSTEAD: Record<string, string> = { '0': 'o', '1': 'i', '3': 'e', '4': 'a', '5': 's', '7': 't', '@': 'a', $: 's', '!': 'i', '|': 'l' }; // prettier-ignore

/**
 * How hard a password is to guess for somebody who puts together what is common: the cheapest way to build it from
 * known words, runs of keys, repetitions and single signs, in bits.
 * @param personal name, e-mail, laboratory: words of which others know that they matter here
 */
export function guessBits(password: string, personal: readonly string[] = []): number {
  const known = new Set(
    personal.flatMap((entry) => entry.toLowerCase().split(/[^\p{L}\p{N}]+/u)).filter(isWord),
  );
  const lower = password.toLowerCase();
  const plain = lower.replace(/[@$!|013457]/g, (sign) => INSTEAD[sign]);
  return Math.min(...[lower, plain].map((text) => cheapest(letters(text), known)));
}

const isWord = (text: string) => text.length >= WORD_LENGTH_MIN;
const letters = (text: string) => text.replace(/[^\p{L}\p{N}]/gu, '');

/** The least cost of a text, piece by piece from its start. */
function cheapest(text: string, personal: ReadonlySet<string>): number {
  const cost = [0];
  for (let end = 1; end <= text.length; end++) {
    let least = cost[end - 1] + signBits(text[end - 1]);
    for (let length = 1; length <= Math.min(end, LONGEST_PIECE); length++) {
      const start = end - length;
      const bits = pieceBits(text.slice(start, end), text, start, personal);
      if (bits !== null) least = Math.min(least, cost[start] + bits);
    }
    cost.push(least);
  }
  return cost[text.length];
}

function signBits(sign: string): number {
  if (/\p{N}/u.test(sign)) return BITS.digit;
  return /[a-z]/.test(sign) ? BITS.letter : BITS.other;
}

/** What a whole piece costs that begins at `start`; null for one that is nothing known. */
function pieceBits(piece: string, text: string, start: number, personal: ReadonlySet<string>): number | null {
  // The same once more, right behind itself.
  if (start >= piece.length && text.startsWith(piece, start - piece.length)) return BITS.again;
  if (!isWord(piece)) return null;
  if (personal.has(piece)) return BITS.ofThePerson;
  const earlier = text.indexOf(piece);
  if (earlier + piece.length <= start) return BITS.again + BITS.ofThePerson;
  const ranked = RANKED.get(piece) ?? Infinity;
  const ofTheField = OF_THE_FIELD.has(piece) ? BITS.ofTheField : Infinity;
  const keyRun = ROWS.includes(piece) ? BITS.keyRun : Infinity;
  const least = Math.min(ranked, ofTheField, keyRun);
  return least === Infinity ? null : least;
}
