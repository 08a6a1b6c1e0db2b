import { sharedSeatings } from '../estimate/shared-seatings.ts';
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
 * Draws levels for a design: links, a partner term a chain, a term of each unit's seating (the same one for all pairs that
 * it serves), and the noise of each take, all normal and independent from frequency to frequency.
 * @param bandOf the band whose scatter holds at each frequency of the bench's set.
 */
export function simulateDesign(
  { set, model, layout }: PlannedBench,
  bandOf: readonly AssumedBand[],
  stream: RandomStream,
): SimulatedRun {
  const width = set.frequencies.length;
  const n = model.linksPerFrequency;
  const shared = sharedSeatings(set, model, layout);
  const truth = new Float64Array(width * n);
  const levels = new Float64Array(set.takes.length * width);
  for (let f = 0; f < width; f++) {
    const { repeat, reseat, partner } = bandOf[f]!;
    // Half of a pair's reseat variance belongs to each unit.
    const ofUnit = () => (reseat / Math.SQRT2) * stream.normal();
    for (let link = 0; link < n; link++) {
      const prior = model.links[link]!.prior;
      const known = prior === undefined ? Number.NaN : prior.value[f]!;
      // A certificate states a value that is off the true one by its own uncertainty.
      truth[f * n + link] = Number.isNaN(known)
        ? LEVELS * stream.normal()
        : known + prior!.uncertainty[f]! * stream.normal();
    }
    const ofShared = shared.seatings.map(ofUnit);
    layout.groups.forEach(({ links, factors }, chain) => {
      let fitted = partner * stream.normal();
      links.forEach((link, k) => {
        fitted += factors[k]! * truth[f * n + link]!;
      });
      for (let seat = layout.seatStart[chain]!; seat < layout.seatStart[chain + 1]!; seat++) {
        const takes = layout.takes[seat]!;
        let ofSeating = shared.ofTake[takes[0]!]!.reduce((sum, s) => sum + ofShared[s]!, 0);
        for (let end = 0; end < shared.ownEnds[seat]!.length; end++) ofSeating += ofUnit();
        for (const take of takes) {
          const known = model.chains[take]!.known?.[f] ?? 0;
          levels[take * width + f] = fitted + known + ofSeating + repeat * stream.normal();
        }
      }
    });
  }
  return { set: { ...set, levels }, truth };
}
