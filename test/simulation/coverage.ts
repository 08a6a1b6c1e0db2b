import { solve } from '../../src/estimate/solve.ts';
import { settle } from '../../src/findings/settle.ts';
import { DEFAULT_RISK } from '../../src/findings/thresholds.ts';
import { buildModel } from '../../src/model/build-model.ts';
import type { Model } from '../../src/model/model.ts';
import { DEFAULT_MODEL_OPTIONS, type ModelOptions } from '../../src/model/model-options.ts';
import { randomStream } from '../../src/numeric/random.ts';
import { coverageFactors } from '../../src/numeric/student-t.ts';
import type { TakeSet } from '../../src/takes/take-set.ts';
import { logSpaced, type SimulatedSet, simulatePairs } from './pair-set.ts';
import type { SimulationOptions } from './simulation-options.ts';

/** A kind of bench whose expanded uncertainties are put to the test. */
export interface CoverageCase {
  readonly title: string;
  readonly simulate: (seed: number) => SimulatedSet;
  readonly model: ModelOptions['model'];
  /** What the intervals are to hold; the response itself, with takes solved by what readings say of themselves, where absent. */
  readonly use?: Use;
  /** Sets that tell the coverage within the suite's few seconds. */
  readonly sets: number;
}

/**
 * A use of a response, with the scatter that was simulated, in dB of a pair: the response itself, that of the unit in a
 * fresh seating, or that on a fresh partner and in a fresh seating. Half of a pair's variance belongs to each unit.
 */
export interface Use {
  readonly of: 'as seated' | 'seated again' | 'other partner';
  readonly reseat: number;
  readonly partner: number;
}

/** How often a response lay within its expanded uncertainty of the truth. */
export interface CoverageFigures {
  readonly sets: number;
  /** Responses × frequencies × sets. */
  readonly intervals: number;
  /** Share of the intervals that hold the truth. */
  readonly coverage: number;
  /**
   * Standard deviation of `coverage`, from how it varies from set to set. Sets are independent; the responses of one are
   * not, as they share readings and, per band, the scatter found.
   */
  readonly samplingError: number;
  /** Median degrees of freedom behind an interval; Infinity where the uncertainty of readings counts as known. */
  readonly medianDof: number;
}

/** Coverage that the intervals are made for. */
export const COVERAGE = 0.95;

const THIRD_OCTAVE = 10 ** 0.1;
/** A frequency in each of 60 third-octave bands: whatever is pooled per band is known from one frequency only. */
const ONE_A_BAND = Float64Array.from({ length: 60 }, (_, k) => 10 * THIRD_OCTAVE ** k);
/** 20 frequencies in each of the 15 bands. */
const MANY_A_BAND = logSpaced(300, 10_000, 320_000);

const [RESEAT, PARTNER] = [0.4, 0.3];
const USES = ['as seated', 'seated again', 'other partner'] as const;

/** Benches with repeats, seatings and partners, by what they are mounted for, for each of the three uses. */
function usesOf(title: string, options: Omit<SimulationOptions, 'seed'>, sets: number): CoverageCase[] {
  const scatter = { repeatScatter: 0.1, reseatScatter: RESEAT, partnerScatter: PARTNER, correlation: 0, ...options };
  const { reseatScatter: reseat, partnerScatter: partner } = scatter;
  return USES.map((of) => ({
    title: `${title}: ${of}`,
    simulate: (seed) => simulatePairs({ seed, ...scatter }),
    model: options.model ?? 'reciprocal',
    use: { of, reseat, partner },
    sets,
  }));
}

/** Scatter is white throughout. Few degrees of freedom are in it, so that a coverage factor of 2 would not do. */
export const COVERAGE_CASES: readonly CoverageCase[] = [
  {
    title: 'each reading with a u_db of its own',
    simulate: (seed) => withOwnUncertainty(simulatePairs({ seed, units: 6, frequencies: MANY_A_BAND }), seed),
    model: 'auto',
    sets: 30,
  },
  {
    title: 'each reading with a u_db of its own, emit and receive on their datum',
    simulate: (seed) => {
      const options = { seed, units: 5, bothWays: true, model: 'directional', frequencies: MANY_A_BAND } as const;
      return onDatum(withOwnUncertainty(simulatePairs(options), seed));
    },
    model: 'directional',
    sets: 20,
  },
  {
    title: 'u from repeats, many frequencies a band',
    simulate: (seed) => simulatePairs({ seed, units: 5, repeats: 2, repeatScatter: 0.2, frequencies: MANY_A_BAND }),
    model: 'auto',
    sets: 30,
  },
  {
    title: 'u from repeats, one frequency a band',
    simulate: (seed) => simulatePairs({ seed, units: 3, repeats: 2, repeatScatter: 0.2, frequencies: ONE_A_BAND }),
    model: 'auto',
    sets: 150,
  },
  {
    title: 'u from residuals, many frequencies a band',
    simulate: (seed) => simulatePairs({ seed, units: 5, repeatScatter: 0.2, frequencies: MANY_A_BAND }),
    model: 'auto',
    sets: 30,
  },
  {
    title: 'u from residuals, one frequency a band',
    simulate: (seed) => simulatePairs({ seed, units: 4, repeatScatter: 0.2, frequencies: ONE_A_BAND }),
    model: 'auto',
    sets: 150,
  },
  ...usesOf('7 units, 3 seatings a pair', { units: 7, seatings: 3, repeats: 2, frequencies: MANY_A_BAND }, 10),
  ...usesOf(
    '7 units, each seated once a round of 4',
    { units: 7, seatings: 4, repeats: 2, mounted: 'for each round', frequencies: MANY_A_BAND },
    10,
  ),
  ...usesOf(
    '7 units, 3 seatings a pair, one frequency a band',
    { units: 7, seatings: 3, repeats: 2, frequencies: ONE_A_BAND },
    20,
  ),
];

/** Solves `sets` simulated sets by the program's own steps and counts the intervals that hold the truth. */
export async function coverageOf(bench: CoverageCase, sets: number): Promise<CoverageFigures> {
  const factorOf = coverageFactors(COVERAGE);
  const shares: number[] = [];
  const dofs: number[] = [];
  for (let seed = 1; seed <= sets; seed++) {
    const { set, truth } = bench.simulate(seed);
    const model = buildModel(set, { ...DEFAULT_MODEL_OPTIONS, model: bench.model });
    const { of = 'as seated', reseat = 0, partner = 0 } = bench.use ?? {};
    const solution = bench.use === undefined ? await solve(set, model) : await settled(set, model);
    const [uncertainty, dofOf] = {
      'as seated': [solution.uncertainty, solution.dof] as const,
      'seated again': [solution.reseatUncertainty, solution.reseatDof] as const,
      'other partner': [solution.partnerUncertainty, solution.partnerDof] as const,
    }[of];
    const fresh = of === 'as seated' ? 0 : Math.hypot(reseat, of === 'other partner' ? partner : 0) / Math.SQRT2;
    const stream = randomStream(seed, FRESH_STREAM);
    let held = 0;
    let counted = 0;
    for (const { link } of model.responses) {
      const own = truth.get(model.links[link]!.name)!;
      for (let f = 0; f < set.frequencies.length; f++) {
        const cell = f * model.linksPerFrequency + link;
        const dof = dofOf[cell]!;
        const expanded = factorOf(dof) * uncertainty[cell]!;
        const met = own[f]! + fresh * stream.normal();
        // An interval of NaN holds nothing: a response without an uncertainty is a miss.
        if (Math.abs(solution.estimates[cell]! - met) <= expanded) held++;
        counted++;
        dofs.push(dof);
      }
    }
    shares.push(held / counted);
  }
  const coverage = shares.reduce((sum, share) => sum + share, 0) / sets;
  const squares = shares.reduce((sum, share) => sum + (share - coverage) ** 2, 0);
  dofs.sort((a, b) => a - b);
  return {
    sets,
    intervals: dofs.length,
    coverage,
    samplingError: Math.sqrt(squares / (sets - 1) / sets),
    medianDof: dofs[dofs.length >> 1]!,
  };
}

/** By the program's own steps, screening and scatter included. */
async function settled(set: TakeSet, model: Model) {
  return (await settle(set, model, { risk: DEFAULT_RISK })).solution;
}

/** A stream that the simulation of sets does not use. */
const FRESH_STREAM = 21;

/** Standard uncertainties of single readings, in dB, evenly between these. */
const OWN = { least: 0.05, most: 0.5 };
/** A stream that the simulation of sets does not use. */
const OWN_STREAM = 20;

/** Gives each reading of a set without scatter an uncertainty of its own, and noise to match. */
function withOwnUncertainty(simulated: SimulatedSet, seed: number): SimulatedSet {
  const stream = randomStream(seed, OWN_STREAM);
  const uncertainty = simulated.set.levels.map(() => OWN.least + (OWN.most - OWN.least) * stream.uniform());
  const levels = simulated.set.levels.map((level, cell) => level + uncertainty[cell]! * stream.normal());
  return { ...simulated, set: { ...simulated.set, levels, uncertainty } };
}

/** Moves the truth of emit and receive to the convention mean(emit − receive) = 0 over all units. */
function onDatum(simulated: SimulatedSet): SimulatedSet {
  const entries = [...simulated.truth];
  const units = entries.length / 2;
  const sign = (name: string) => (name.endsWith(' emit') ? 1 : -1);
  const shift = simulated.set.frequencies.map((_, f) =>
    entries.reduce((sum, [name, levels]) => sum + (sign(name) * levels[f]!) / (2 * units), 0),
  );
  const truth = new Map(
    entries.map(([name, levels]) => [name, levels.map((level, f) => level - sign(name) * shift[f]!)]),
  );
  return { ...simulated, truth };
}
