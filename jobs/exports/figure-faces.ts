import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import * as fontkit from 'fontkit';
import { rootDir } from '@/lib/env';
import type { FigureFace } from '@/lib/figures/figure';
import type { EmbeddedFace } from '@/lib/figures/figure-svg';

interface Face {
  family: string;
  bytes: Buffer;
  font: fontkit.Font;
}

const FILES: Record<FigureFace, [family: string, file: string]> = {
  sans: ['Source Sans 3', 'source-sans-3-regular.ttf'],
  strong: ['Source Sans 3 Semibold', 'source-sans-3-semibold.ttf'],
  italic: ['STIX Two Text', 'stix-two-text-italic.ttf'],
};

const opened = new Map<FigureFace, Face>();

/** A face of figures, read once per process from the fonts that ship. */
export function figureFace(face: FigureFace): Face {
  const known = opened.get(face);
  if (known) return known;
  const [family, file] = FILES[face];
  const bytes = readFileSync(join(rootDir(), 'fonts', 'figures', file));
  const made = { family, bytes, font: fontkit.create(bytes) as fontkit.Font };
  opened.set(face, made);
  return made;
}

/** Faces as an SVG file carries them. */
export const embeddedFaces = (faces: Iterable<FigureFace>): EmbeddedFace[] =>
  [...faces].sort().map((face) => {
    const { family, bytes } = figureFace(face);
    return { family, base64: bytes.toString('base64') };
  });
