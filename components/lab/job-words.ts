const KIND_WORDS: Record<string, string> = {
  'ingest-recording': 'check a recording',
  'measure-image': 'measure the image',
  'detect-spots': 'find spots',
  'link-tracks': 'link tracks',
  'measure-flow': 'measure the flow',
  'simulate-rehearsal': 'simulate a rehearsal',
  'assess-rehearsal': 'compare a rehearsal with its truth',
  'remeasure-tracks': 'measure corrected tracks',
  'send-mail': 'send a mail',
  'check-files': 'check stored files',
  'compose-strips': 'compose strips of candidates',
  'build-export': 'build a data package',
};

/** What a piece of work does: `find spots, chunk 3`. */
export function jobWords({ kind, chunk }: { kind: string; chunk: number }): string {
  const words = KIND_WORDS[kind] ?? kind;
  if (chunk < 0) return words;
  return kind === 'remeasure-tracks' ? `${words}, revision ${chunk}` : `${words}, chunk ${chunk + 1}`;
}
