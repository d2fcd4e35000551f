/** `524288` as `524,288`: the way numbers stand in sentences. */
export function grouped(value: number): string {
  return value.toLocaleString('en-US', { maximumFractionDigits: 0 });
}

/** A size in MB (10^6 bytes) or GB, never rounded below the true size. */
export function megabytes(bytes: number): string {
  const [size, unit] = bytes >= 1e9 ? [bytes / 1e9, 'GB'] : [bytes / 1e6, 'MB'];
  const rounded = size >= 10 ? Math.ceil(size) : Math.ceil(size * 10) / 10;
  return `${rounded} ${unit}`;
}

/** Ascending whole numbers as `3, 9-11`; past `most` ranges the rest is counted. */
export function ranges(
  ascending: readonly number[],
  write: (value: number) => string = String,
  most = 12,
): string {
  const parts: string[] = [];
  let covered = 0;
  for (let i = 0; i < ascending.length && parts.length < most;) {
    let last = i;
    while (last + 1 < ascending.length && ascending[last + 1] === ascending[last]! + 1) last++;
    parts.push(last === i ? write(ascending[i]!) : `${write(ascending[i]!)}-${write(ascending[last]!)}`);
    covered += last - i + 1;
    i = last + 1;
  }
  const left = ascending.length - covered;
  return left > 0 ? `${parts.join(', ')} and ${grouped(left)} more` : parts.join(', ');
}

/** `page 1 is` / `pages 1-6 are`. */
export function pagesAre(last: number): string {
  return last === 1 ? 'page 1 is' : `pages 1-${last} are`;
}

/** A file name fit for a sentence: control marks shown as `?`, long names cut in the middle. */
export function shownName(name: string): string {
  const clean = name.replace(/[\p{Cc}\p{Cf}\u2028\u2029]/gu, '?');
  return clean.length > 120 ? `${clean.slice(0, 60)}…${clean.slice(-50)}` : clean;
}
