const KIND_WORDS: Record<string, string> = {
  'ingest-recording': 'check a recording',
  'measure-image': 'measure the image',
  'detect-spots': 'find spots',
  'link-tracks': 'link tracks',
  'measure-flow': 'measure the flow',
  'simulate-rehearsal': 'simulate a rehearsal',
  'assess-rehearsal': 'compare a rehearsal with its truth',
  'send-mail': 'send a mail',
  'check-files': 'check stored files',
  'compose-strips': 'compose strips of candidates',
  'build-export': 'build a data package',
};

/** What a piece of work does: `find spots, chunk 3`. */
export const jobWords = ({ kind, chunk }: { kind: string; chunk: number }): string =>
  `${KIND_WORDS[kind] ?? kind}${chunk >= 0 ? `, chunk ${chunk + 1}` : ''}`;
