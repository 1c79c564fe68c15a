/** Draws from a seeded generator: the same seed and name always give the same sequence. */
export interface Draw {
  /** Uniform in [0, 1). */
  next(): number;
  uniform(low: number, high: number): number;
  /** Whole number in [0, below). */
  integer(below: number): number;
  chance(probability: number): boolean;
  pick<T>(choices: readonly T[]): T;
  /** Standard normal (Box–Muller). */
  normal(): number;
  /** Poisson; by the normal approximation above a mean of 60. */
  poisson(mean: number): number;
}

/** mulberry32 started from the seed mixed with an FNV-1a hash of the name. */
export function drawGenerator(seed: number, name: string): Draw {
  let state = seed ^ 0x811c9dc5;
  for (let index = 0; index < name.length; index += 1) state = Math.imul(state ^ name.charCodeAt(index), 0x01000193);
  const next = (): number => {
    state = (state + 0x6d2b79f5) | 0;
    let mixed = Math.imul(state ^ (state >>> 15), 1 | state);
    mixed = (mixed + Math.imul(mixed ^ (mixed >>> 7), 61 | mixed)) ^ mixed;
    return ((mixed ^ (mixed >>> 14)) >>> 0) / 4_294_967_296;
  };
  const normal = (): number => Math.sqrt(-2 * Math.log(1 - next())) * Math.cos(2 * Math.PI * next());
  return {
    next,
    uniform: (low, high) => low + (high - low) * next(),
    integer: (below) => Math.floor(next() * below),
    chance: (probability) => next() < probability,
    pick: (choices) => {
      const choice = choices[Math.floor(next() * choices.length)];
      if (choice === undefined) throw new RangeError('nothing to pick from');
      return choice;
    },
    normal,
    poisson: (mean) => {
      if (mean > 60) return Math.max(0, Math.round(mean + Math.sqrt(mean) * normal()));
      const limit = Math.exp(-mean);
      let count = 0;
      for (let product = next(); product > limit; product *= next()) count += 1;
      return count;
    },
  };
}
