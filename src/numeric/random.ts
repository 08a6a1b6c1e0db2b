import { uniformFloat64 } from 'pure-rand/distribution/uniformFloat64';
import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';

/** A seeded source of random numbers; the same seed and stream give the same numbers on every machine. */
export interface RandomStream {
  /** Uniform on [0, 1). */
  uniform(): number;
  /** Standard normal. */
  normal(): number;
  /** Uniform whole number from 0 to `count` − 1. */
  below(count: number): number;
}

/** First draws are nearly the same for every small seed, so that many are thrown away. */
const DISCARDED_DRAWS = 32;

/**
 * Opens stream number `stream` of `seed`. Streams are 2^64 draws apart, so that blocks of work can each have one and
 * results do not depend on the order of work.
 * Normals by the polar method (Marsaglia & Bray 1964, SIAM Review 6, 260–264).
 */
export function randomStream(seed: number, stream = 0): RandomStream {
  const generator = xoroshiro128plus(seed);
  for (let i = 0; i < DISCARDED_DRAWS; i++) generator.next();
  for (let i = 0; i < stream; i++) generator.jump();
  let spare: number | undefined;

  const uniform = (): number => uniformFloat64(generator);
  const normal = (): number => {
    if (spare !== undefined) {
      const value = spare;
      spare = undefined;
      return value;
    }
    for (;;) {
      const x = 2 * uniform() - 1;
      const y = 2 * uniform() - 1;
      const square = x * x + y * y;
      if (square >= 1 || square === 0) continue;
      const scale = Math.sqrt((-2 * Math.log(square)) / square);
      spare = y * scale;
      return x * scale;
    }
  };
  return { uniform, normal, below: (count) => Math.floor(uniform() * count) };
}
