import { createHash } from 'node:crypto';
import { describe, expect, it } from 'vitest';
import { Sha256 } from '@/lib/sha256';
import { createRandom } from '@/tracking/random';

const bytesOf = (text: string) => new TextEncoder().encode(text);

describe('the incremental SHA-256', () => {
  // NIST CSRC, "Examples with Intermediate Values" for SHA-256, and the byte-oriented empty message of SHAVS.
  it.each([
    ['', 'e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855'],
    ['abc', 'ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad'],
    [
      'abcdbcdecdefdefgefghfghighijhijkijkljklmklmnlmnomnopnopq',
      '248d6a61d20638b8e5c026930c3e6039a33ce45964ff2167f6ecedd419db06c1',
    ],
  ])('gives the published digest of %j', (message, digest) => {
    expect(new Sha256().update(bytesOf(message)).hex()).toBe(digest);
  });

  it('gives the published digest of a million letters a, however they are cut', () => {
    // FIPS 180-2, appendix B.3.
    const digest = 'cdc76e5c9914fb9281a1c7e284d73e67f1809a48a497200e046d39ccc7112cd0';
    const hash = new Sha256();
    const piece = new Uint8Array(997).fill(97);
    let left = 1_000_000;
    while (left > 0) {
      const take = Math.min(left, piece.length);
      hash.update(piece.subarray(0, take));
      left -= take;
    }
    expect(hash.hex()).toBe(digest);
  });

  it('agrees with the platform at every length around the block borders and for random cuts', () => {
    const { uniform: random } = createRandom(5);
    for (let length = 0; length < 200; length += 1) {
      const bytes = Uint8Array.from({ length }, () => Math.floor(random() * 256));
      const hash = new Sha256();
      let at = 0;
      while (at < length) {
        const next = Math.min(length, at + 1 + Math.floor(random() * 80));
        hash.update(bytes.subarray(at, next));
        at = next;
      }
      expect(hash.hex()).toBe(createHash('sha256').update(bytes).digest('hex'));
    }
  });
});
