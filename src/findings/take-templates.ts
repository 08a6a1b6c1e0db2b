import type { Deviations } from '../estimate/scatter-of-level.ts';
import { isGiven, type Solution } from '../estimate/solution.ts';
import { hertz } from '../quantity/frequency.ts';
import { bandHolding, octaveBand } from '../quantity/octave-bands.ts';
import type { TakeSet } from '../takes/take-set.ts';
import { errorCorrelation, independentInMean } from './error-correlation.ts';

/** What a take is tested for: one figure a take, made from its residuals. */
export interface Template {
  readonly kind: 'constant' | 'slope' | 'band';
  /** Hertz. */
  readonly from: number;
  readonly to: number;
  readonly deviations: Deviations;
}

/** The residuals of one third-octave band, a column a frequency. */
export interface BandColumns {
  readonly from: number;
  readonly to: number;
  /** Indices of the frequencies. */
  readonly frequencies: readonly number[];
  readonly deviations: Deviations;
}

/** A take is left out of a band of which it misses more than this part. Common practice, no source. */
const LARGEST_GAP = 0.5;

/**
 * Figures of all takes: a constant and a slope over all frequencies, and means over third-octaves that overlap by half.
 * Frequencies weigh by how little the residuals scatter at them. Slopes are in dB per decade.
 */
export function takeTemplates(set: TakeSet, solution: Solution): Template[] {
  const weights = frequencyWeights(set, solution);
  const given = givenVariance(solution);
  const all = [...set.frequencies.keys()];
  const x = Float64Array.from(set.frequencies, Math.log10);
  const ends = { from: set.frequencies[0]!, to: set.frequencies.at(-1)! };
  // Only a given variance has to be told how many frequencies are independent: other scatter is that of the figure itself.
  const correlation = isGiven(solution.readingUncertainty.source) ? errorCorrelation(set, solution.residuals) : 0;
  const project = (members: readonly number[], centred: boolean) =>
    projection(set, solution, { members, weights, x: centred ? x : undefined, given, correlation });
  const templates: Template[] = [{ kind: 'constant', ...ends, deviations: project(all, false) }];
  if (all.length >= FEWEST_FOR_SLOPE) templates.push({ kind: 'slope', ...ends, deviations: project(all, true) });
  for (const band of overlappingBands(set)) {
    // A band that holds all frequencies would only repeat the constant.
    if (band.members.length === all.length) continue;
    templates.push({ kind: 'band', from: band.from, to: band.to, deviations: project(band.members, false) });
  }
  return templates;
}

const FEWEST_FOR_SLOPE = 4;

/** The residuals of each third-octave band. */
export function bandColumns(set: TakeSet, solution: Solution): BandColumns[] {
  const width = set.frequencies.length;
  const given = givenVariance(solution);
  const groups = new Map<number, number[]>();
  set.frequencies.forEach((frequency, f) => {
    const { index } = bandHolding(hertz(frequency), 3);
    groups.set(index, [...(groups.get(index) ?? []), f]);
  });
  return [...groups].map(([index, frequencies]) => {
    const columns = frequencies.length;
    const values = new Float64Array(set.takes.length * columns);
    const active = set.takes.map((_, t) => {
      let complete = true;
      frequencies.forEach((f, c) => {
        const residual = solution.residuals[t * width + f]!;
        values[t * columns + c] = residual;
        if (Number.isNaN(residual)) complete = false;
      });
      return complete;
    });
    const { from, to } = octaveBand(index, 3);
    const givenVariance = Float64Array.from(set.takes, (_, t) =>
      active[t] ? mean(frequencies.map((f) => given(t * width + f))) : 0,
    );
    return {
      from,
      to,
      frequencies,
      deviations: { values, columns, present: active, active, givenVariance },
    };
  });
}

interface Projection {
  readonly members: readonly number[];
  readonly weights: Float64Array;
  /** Abscissa for a slope; absent for a mean. */
  readonly x: Float64Array | undefined;
  /** Variance of a reading as the user gives it, by its cell. */
  readonly given: (cell: number) => number;
  /** Of errors at neighbouring frequencies. */
  readonly correlation: number;
}

function projection(set: TakeSet, solution: Solution, how: Projection): Deviations {
  const width = set.frequencies.length;
  const values = new Float64Array(set.takes.length);
  const givenVariance = new Float64Array(set.takes.length);
  const share = independentInMean(how.correlation, how.members.length) / how.members.length;
  const active = set.takes.map((_, t) => {
    const there = how.members.filter((f) => how.weights[f]! > 0 && !Number.isNaN(solution.residuals[t * width + f]!));
    if (there.length === 0 || there.length < (1 - LARGEST_GAP) * how.members.length) return false;
    const weight = there.reduce((sum, f) => sum + how.weights[f]!, 0);
    const centre = how.x && there.reduce((sum, f) => sum + how.weights[f]! * how.x![f]!, 0) / weight;
    const basis = (f: number) => (centre === undefined ? 1 : how.x![f]! - centre);
    let sum = 0;
    let squares = 0;
    let variance = 0;
    for (const f of there) {
      const b = how.weights[f]! * basis(f);
      sum += b * solution.residuals[t * width + f]!;
      squares += b * basis(f);
      variance += b * b * how.given(t * width + f);
    }
    values[t] = sum / squares;
    givenVariance[t] = variance / squares ** 2 / share;
    return true;
  });
  return { values, columns: 1, present: active, active, givenVariance };
}

/**
 * 1 / (mean absolute residual)², the wildest takes cut off, so that one resonance does not drown the rest of the range.
 * 0 where nothing checks any reading: a residual of 0 says nothing there.
 */
function frequencyWeights(set: TakeSet, { residuals, redundancy }: Solution): Float64Array {
  const width = set.frequencies.length;
  const level = new Float64Array(width);
  const meanBelow = (f: number, limit: number) => {
    let sum = 0;
    let count = 0;
    for (let t = 0; t < set.takes.length; t++) {
      const residual = Math.abs(residuals[t * width + f]!);
      if (Number.isNaN(residual) || !(redundancy[t * width + f]! > 0)) continue;
      sum += Math.min(residual, limit);
      count++;
    }
    return count === 0 ? Number.NaN : sum / count;
  };
  for (let f = 0; f < width; f++) level[f] = meanBelow(f, 3 * meanBelow(f, Number.POSITIVE_INFINITY));
  const checked = Array.from(level).filter((value) => !Number.isNaN(value));
  // Where nothing is checked at all, every frequency stands for that alike.
  if (checked.length === 0) return level.fill(1);
  const floor = mean(checked) * 0.1;
  return level.map((value) => (Number.isNaN(value) ? 0 : floor > 0 ? 1 / Math.max(value, floor) ** 2 : 1));
}

/** Variance of a reading by its cell where the user gives it (`u_db`, averages, or one figure); 0 elsewhere. */
function givenVariance({ readingUncertainty: { source, values } }: Solution): (cell: number) => number {
  return isGiven(source) ? (cell) => values[cell]! ** 2 : () => 0;
}

function overlappingBands(set: TakeSet): { from: number; to: number; members: number[] }[] {
  const half = new Map<number, number[]>();
  // Sixth-octave halves, put together two by two: third-octaves and those shifted by half a band.
  set.frequencies.forEach((frequency, f) => {
    const { index } = bandHolding(hertz(frequency), 6);
    half.set(index, [...(half.get(index) ?? []), f]);
  });
  const indices = [...half.keys()].sort((a, b) => a - b);
  const first = indices[0];
  const last = indices.at(-1);
  const bands: { from: number; to: number; members: number[] }[] = [];
  if (first === undefined || last === undefined) return bands;
  let before = '';
  for (let index = first - 1; index <= last; index++) {
    const members = [...(half.get(index) ?? []), ...(half.get(index + 1) ?? [])];
    // Sparse frequencies make neighbours alike: the same members are tested once.
    if (members.length === 0 || members.join() === before) continue;
    before = members.join();
    bands.push({ from: octaveBand(index, 6).from, to: octaveBand(index + 1, 6).to, members });
  }
  return bands;
}

function mean(values: readonly number[]): number {
  return values.reduce((sum, value) => sum + value, 0) / values.length;
}
