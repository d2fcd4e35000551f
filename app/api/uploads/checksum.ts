import { LabError } from '@/lib/errors';

/** Names of the tus checksum extension and of Node's hashes are the same for these. */
export const CHECKSUM_ALGORITHMS = ['sha1', 'sha256'] as const;

export interface Checksum {
  algorithm: (typeof CHECKSUM_ALGORITHMS)[number];
  digest: Buffer;
}

const DIGEST_BYTES = { sha1: 20, sha256: 32 } as const;

/**
 * tus 1.0.0, checksum: "The Upload-Checksum request header contains the name of the used checksum
 * algorithm and the Base64 encoded checksum separated by a space"; an algorithm that is not
 * supported "MUST respond with 400 Bad Request".
 */
export function readChecksum(header: string | null): Checksum | null {
  if (header === null) return null;
  const [name, base64 = '', ...rest] = header.trim().split(' ');
  const algorithm = CHECKSUM_ALGORITHMS.find((known) => known === name);
  if (!algorithm) {
    throw new LabError('QUERY', `Upload-Checksum must use ${CHECKSUM_ALGORITHMS.join(' or ')}.`);
  }
  const digest = Buffer.from(base64, 'base64');
  if (rest.length > 0 || digest.length !== DIGEST_BYTES[algorithm]) {
    throw new LabError('QUERY', `Upload-Checksum must be '${algorithm}' and the Base64 of its digest.`);
  }
  return { algorithm, digest };
}
