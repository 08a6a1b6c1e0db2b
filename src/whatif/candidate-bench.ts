import { knownLinks } from '../model/find-patterns.ts';
import type { ModelOptions } from '../model/model-options.ts';
import type { FreeDirection } from '../model/separability.ts';
import type { AssumedBand } from './assumed-scatter.ts';
import { type ChainInformation, chainInformation } from './chain-information.ts';
import type { Design, PlannedSeating } from './design.ts';
import { plannedBench } from './planned-bench.ts';

/** A chain that stands in the design, may be added to it, or both. */
export interface CandidateChain {
  /** Links with their factors. */
  readonly links: readonly number[];
  readonly factors: readonly number[];
  /** Takes of each seating that the design has. */
  readonly counts: readonly number[];
  /** What would be added: absent where nothing may be. */
  readonly seating: PlannedSeating | undefined;
}

/** A design with all that may be added to it, for trying out sets of takes. */
export interface CandidateBench {
  readonly chains: readonly CandidateChain[];
  readonly links: number;
  /** Links whose uncertainty counts: the responses. */
  readonly counted: readonly number[];
  /** Of known links: 1 / u². */
  readonly priors: readonly { readonly link: number; readonly weight: number }[];
  /** Freedoms that a convention stands for once everything is taken. */
  readonly datums: readonly FreeDirection[];
  /** What a chain says with `added` more seatings. */
  readonly information: (chain: number, added: number) => ChainInformation;
}

/**
 * Sets up a design with candidates; the model's own rules say which candidates share a chain.
 * @param candidates seatings that may be added, one a pair.
 * @throws InputError where the model's options name units that are not there.
 */
export function candidateBench(
  design: Design,
  candidates: readonly PlannedSeating[],
  band: AssumedBand,
  options: ModelOptions,
): CandidateBench {
  const whole: Design = { ...design, seatings: [...design.seatings, ...candidates] };
  const { model, layout, patterns, seatingOfTake } = plannedBench(whole, options);
  const own = design.seatings.length;
  const chains = layout.groups.map(({ links, factors, seatings }): CandidateChain => {
    const seatingsOf = seatings.map((takes) => seatingOfTake[takes[0]!]!);
    const added = seatingsOf.find((seating) => seating >= own);
    return {
      links,
      factors,
      counts: seatings.filter((_, s) => seatingsOf[s]! < own).map((takes) => takes.length),
      seating: added === undefined ? undefined : whole.seatings[added],
    };
  });
  const known = new Map<number, ChainInformation>();
  return {
    chains,
    links: model.linksPerFrequency,
    counted: [...new Set(model.responses.map(({ link }) => link))],
    priors: knownLinks(model, 0).map((link) => ({ link, weight: 1 / model.links[link]!.prior!.uncertainty[0]! ** 2 })),
    datums: patterns.patterns[0]!.separability.directions.filter(({ status }) => status === 'datum'),
    information(chain, added) {
      const key = chain * 1000 + added;
      const found = known.get(key);
      if (found !== undefined) return found;
      const { counts, seating } = chains[chain]!;
      const fresh = chainInformation([...counts, ...new Array<number>(added).fill(seating?.repeats ?? 1)], band);
      known.set(key, fresh);
      return fresh;
    },
  };
}
