import { shiftsOfTakes } from '../estimate/shifts-of-takes.ts';
import { LINK_STATUS } from '../estimate/solution.ts';
import { type Settled, settle } from '../findings/settle.ts';
import { DEFAULT_RISK } from '../findings/thresholds.ts';
import type { ModelOptions } from '../model/model-options.ts';
import { randomStream } from '../numeric/random.ts';
import { coverageFactors } from '../numeric/student-t.ts';
import { hertz } from '../quantity/frequency.ts';
import { bandHolding, octaveBand } from '../quantity/octave-bands.ts';
import type { AssumedBand } from './assumed-scatter.ts';
import type { Design } from './design.ts';
import { type PlannedBench, plannedBench, responsesInOrder } from './planned-bench.ts';
import { plannedCovariance } from './planned-covariance.ts';
import { type SimulatedRun, simulateDesign } from './simulate-design.ts';

export interface RehearseOptions {
  readonly runs: number;
  readonly seed: number;
  readonly coverage: number;
  readonly model?: ModelOptions | undefined;
  /** Shift of one take that is planted, in dB. */
  readonly fault: number;
  readonly risk?: number | undefined;
  readonly onProgress?: ((done: number, total: number) => void) | undefined;
}

/** What one unit was predicted to have, and what came of it. Decibels; NaN where the unit is open. */
export interface RehearsedUnit {
  readonly name: string;
  readonly predicted: number;
  /** Root mean square of estimate − truth over runs and frequencies. */
  readonly seen: number;
  /** Root mean square of the uncertainty that the solver stated; NaN where it stated none. */
  readonly stated: number;
  /** Part of the true values inside the stated interval; NaN where none was stated. */
  readonly covered: number;
}

export interface Rehearsal {
  readonly runs: number;
  /** Frequencies of each run. */
  readonly frequencies: number;
  readonly units: readonly RehearsedUnit[];
  /** Over all units. */
  readonly predicted: number;
  readonly seen: number;
  readonly stated: number;
  readonly covered: number;
  /** Standard error of `seen` as a part of it: chance alone makes it differ from the prediction by so much. */
  readonly chance: number;
  /** Runs with a shift planted in a take that something checks, and in how many of them that very take was found. */
  readonly planted: number;
  readonly found: number;
  /** … and in how many it was found tied with others. */
  readonly tied: number;
  readonly fault: number;
  /** Runs without a fault in which a take was flagged all the same. */
  readonly falseAlarms: number;
}

/** Frequencies of a third-octave: enough to tell the scatter, few enough to be quick. */
const FREQUENCIES_A_BAND = 12;
/** More bands than this are thinned out evenly. */
const MOST_BANDS = 6;
/** Where a design knows no frequency. Hertz. */
const ANY_FREQUENCY = 10_000;
const OPEN = LINK_STATUS.indexOf('open');

/**
 * Simulates the design, solves it with the real code, which knows nothing of the scatter assumed, and holds what is seen
 * against what was predicted. Each run is solved twice: as it is, and with a constant shift planted in one take.
 * Cost: two runs of the solver each.
 */
export async function rehearse(
  design: Design,
  bands: readonly AssumedBand[],
  options: RehearseOptions,
): Promise<Rehearsal> {
  const { frequencies, bandOf } = frequenciesOf(bands);
  const bench = plannedBench(design, options.model, frequencies);
  const predicted = await predictedVariances(bench, bandOf);
  const tally = emptyTally(bench.model.responses.length);
  const takes = await checkableTakes(bench, bandOf[0]!);
  const factorOf = coverageFactors(options.coverage);
  const risk = options.risk ?? DEFAULT_RISK;
  let [planted, found, tied, falseAlarms] = [0, 0, 0, 0];
  for (let run = 0; run < options.runs; run++) {
    options.onProgress?.(run, options.runs);
    const stream = randomStream(options.seed + run);
    const simulated = simulateDesign(bench, bandOf, stream);
    const settled = await settle(simulated.set, bench.model, { risk });
    compare(bench, simulated, settled, factorOf, tally);
    if (settled.screening.takes.some(({ verdict }) => verdict === 'flagged' || verdict === 'tied')) falseAlarms++;
    if (takes.length === 0) continue;
    const take = takes[stream.below(takes.length)]!;
    const width = simulated.set.frequencies.length;
    const levels = simulated.set.levels.map((level, cell) =>
      Math.floor(cell / width) === take ? level + options.fault : level,
    );
    const again = await settle({ ...simulated.set, levels }, bench.model, { risk });
    planted++;
    const { verdict } = again.screening.takes[take]!;
    if (verdict === 'flagged') found++;
    if (verdict === 'tied') tied++;
  }
  const units = responsesInOrder(bench).map((r): RehearsedUnit => {
    const { link } = bench.model.responses[r]!;
    const { cells, squares, stated, statedCells, covered } = tally[r]!;
    return {
      name: bench.model.links[link]!.name,
      predicted: Math.sqrt(predicted[r]!),
      seen: Math.sqrt(squares / cells),
      stated: Math.sqrt(stated / statedCells),
      covered: covered / statedCells,
    };
  });
  const sum = (of: (entry: Tally) => number) => tally.reduce((total, entry) => total + of(entry), 0);
  const told = units.filter((unit) => !Number.isNaN(unit.seen));
  return {
    runs: options.runs,
    frequencies: frequencies.length,
    units,
    predicted: Math.sqrt(told.reduce((total, unit) => total + unit.predicted ** 2, 0) / told.length),
    seen: Math.sqrt(sum(({ squares }) => squares) / sum(({ cells }) => cells)),
    stated: Math.sqrt(sum(({ stated }) => stated) / sum(({ statedCells }) => statedCells)),
    covered: sum(({ covered }) => covered) / sum(({ statedCells }) => statedCells),
    // Units of one run share takes; one unit's errors are independent from run to run and frequency to frequency.
    chance: 1 / Math.sqrt(2 * options.runs * frequencies.length),
    planted,
    found,
    tied,
    fault: options.fault,
    falseAlarms,
  };
}

function frequenciesOf(bands: readonly AssumedBand[]): { frequencies: number[]; bandOf: AssumedBand[] } {
  const step = Math.max(1, bands.length / MOST_BANDS);
  const used = bands.filter((_, b) => Math.floor(b / step) !== Math.floor((b - 1) / step));
  const frequencies: number[] = [];
  const bandOf: AssumedBand[] = [];
  for (const band of used) {
    const middle = Number.isNaN(band.from) ? ANY_FREQUENCY : Math.sqrt(band.from * band.to);
    // Within one third-octave, since the solver learns its scatter third-octave by third-octave.
    const { from, to } = octaveBand(bandHolding(hertz(middle), 3).index, 3);
    for (let k = 0; k < FREQUENCIES_A_BAND; k++) {
      frequencies.push(from * (to / from) ** ((k + 0.5) / FREQUENCIES_A_BAND));
      bandOf.push(band);
    }
  }
  return { frequencies, bandOf };
}

/** Mean predicted variance of each response over the frequencies. */
async function predictedVariances(bench: PlannedBench, bandOf: readonly AssumedBand[]): Promise<Float64Array> {
  const { model } = bench;
  const n = model.linksPerFrequency;
  const sums = new Float64Array(model.responses.length);
  const hasPriors = model.links.some(({ prior }) => prior !== undefined);
  let covariance = new Float64Array(0);
  for (let f = 0; f < bandOf.length; f++) {
    // Frequencies of one band differ in certificates only.
    if (f === 0 || hasPriors || bandOf[f] !== bandOf[f - 1]) {
      covariance = Float64Array.from((await plannedCovariance(bench, bandOf[f]!, f)).covariance);
    }
    model.responses.forEach(({ link }, r) => {
      sums[r] = sums[r]! + covariance[link * n + link]! / bandOf.length;
    });
  }
  return sums;
}

/** Takes that repeats, other seatings or other chains check. */
async function checkableTakes(bench: PlannedBench, band: AssumedBand): Promise<number[]> {
  const { scatter } = await plannedCovariance(bench, band, 0);
  const { uncertainty } = shiftsOfTakes(bench.layout, scatter);
  return [...bench.set.takes.keys()].filter((take) => !Number.isNaN(uncertainty[take]!));
}

interface Tally {
  cells: number;
  squares: number;
  stated: number;
  statedCells: number;
  covered: number;
}

function emptyTally(count: number): Tally[] {
  return Array.from({ length: count }, () => ({ cells: 0, squares: 0, stated: 0, statedCells: 0, covered: 0 }));
}

function compare(
  { model, patterns }: PlannedBench,
  { truth, set }: SimulatedRun,
  { solution }: Settled,
  factorOf: (dof: number) => number,
  tally: readonly Tally[],
): void {
  const n = model.linksPerFrequency;
  for (let f = 0; f < set.frequencies.length; f++) {
    const { directions } = patterns.patterns[patterns.patternOf[f]!]!.separability;
    const own = truth.slice(f * n, (f + 1) * n);
    // The truth is brought to the datum of the solution: only what the convention leaves is compared.
    for (const { movement, restraint, status } of directions) {
      if (status !== 'datum') continue;
      const across = dot(restraint, own) / dot(restraint, movement);
      for (let link = 0; link < n; link++) own[link] = own[link]! - across * movement[link]!;
    }
    model.responses.forEach(({ link }, r) => {
      const cell = f * n + link;
      if (solution.status[cell] === OPEN) return;
      const entry = tally[r]!;
      const error = solution.estimates[cell]! - own[link]!;
      entry.cells++;
      entry.squares += error * error;
      const u = solution.uncertainty[cell]!;
      if (Number.isNaN(u)) return;
      entry.statedCells++;
      entry.stated += u * u;
      if (Math.abs(error) <= u * factorOf(solution.dof[cell]!)) entry.covered++;
    });
  }
}

function dot(a: Float64Array, b: Float64Array): number {
  return a.reduce((sum, entry, i) => sum + entry * b[i]!, 0);
}
