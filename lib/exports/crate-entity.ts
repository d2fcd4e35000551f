/** One thing of the flat graph of a crate. */
export type Entity = Record<string, unknown> & { '@id': string; '@type': string | string[] };
