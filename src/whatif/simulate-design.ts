import type { RandomStream } from '../numeric/random.ts';
import type { TakeSet } from '../takes/take-set.ts';
import type { AssumedBand } from './assumed-scatter.ts';
import type { PlannedBench } from './planned-bench.ts';

/** A run that might have been. */
export interface SimulatedRun {
  readonly set: TakeSet;
  /** True links, dB, entry (f, link) at f · links + link. */
  readonly truth: Float64Array;
}

/** Standard deviation of units' levels among each other, in dB: it does not matter to what is estimated. */
const LEVELS = 6;

/**
 * Draws levels for a design: links, a partner term a chain, a seating term a seating, and the noise of each take, all
 * normal and independent from frequency to frequency.
 * @param bandOf the band whose scatter holds at each frequency of the bench's set.
 */
export function simulateDesign(
  { set, model, layout }: PlannedBench,
  bandOf: readonly AssumedBand[],
  stream: RandomStream,
): SimulatedRun {
  const width = set.frequencies.length;
  const n = model.linksPerFrequency;
  const truth = new Float64Array(width * n);
  const levels = new Float64Array(set.takes.length * width);
  for (let f = 0; f < width; f++) {
    const { repeat, reseat, partner } = bandOf[f]!;
    for (let link = 0; link < n; link++) {
      const prior = model.links[link]!.prior;
      const known = prior === undefined ? Number.NaN : prior.value[f]!;
      // A certificate states a value that is off the true one by its own uncertainty.
      truth[f * n + link] = Number.isNaN(known)
        ? LEVELS * stream.normal()
        : known + prior!.uncertainty[f]! * stream.normal();
    }
    layout.groups.forEach(({ links, factors, seatings }) => {
      const ofChain = partner * stream.normal();
      let fitted = ofChain;
      links.forEach((link, k) => {
        fitted += factors[k]! * truth[f * n + link]!;
      });
      for (const takes of seatings) {
        const ofSeating = reseat * stream.normal();
        for (const take of takes) {
          const known = model.chains[take]!.known?.[f] ?? 0;
          levels[take * width + f] = fitted + known + ofSeating + repeat * stream.normal();
        }
      }
    });
  }
  return { set: { ...set, levels }, truth };
}
