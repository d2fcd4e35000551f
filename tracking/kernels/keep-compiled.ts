const kept = new Map<string, object>();

/**
 * Holds on to what was made last under a name. Engines compile hot functions to machine code, which they
 * forget along with the last closure that ran it: a process that measures one recording after the other would
 * else compile its inner loops anew for each. Nothing is read from here, so results don't depend on it; memory
 * is that of one of each name.
 */
export function keepCompiled<T extends object>(name: string, made: T): T {
  kept.set(name, made);
  return made;
}
