/** Which spot follows which; the same length as the spots, -1 for none. */
export interface TrackLinks {
  before: Int32Array;
  after: Int32Array;
  /** 1 for each spot whose links are others than those of the first pass. */
  changed: Uint8Array;
}

/** @param before for each spot the one before it in its track, or -1; becomes part of the links. */
export function trackLinks(before: Int32Array): TrackLinks {
  const after = new Int32Array(before.length).fill(-1);
  for (let s = 0; s < before.length; s++) if (before[s] >= 0) after[before[s]] = s;
  return { before, after, changed: new Uint8Array(before.length) };
}

/** Lets spot `s` follow spot `b`, or start a track where `b` is -1. The spot that followed `b` is left as it is. */
export function putBefore(links: TrackLinks, s: number, b: number): void {
  const { before, after, changed } = links;
  const old = before[s];
  if (old !== b) {
    changed[s] = 1;
    if (old >= 0) changed[old] = 1;
    if (b >= 0) changed[b] = 1;
  }
  before[s] = b;
  if (b >= 0) after[b] = s;
}
