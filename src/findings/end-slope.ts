import { effectiveCount } from '../numeric/effective-count.ts';
import { studentUpper } from '../numeric/student-t.ts';
import { type PairBand, residualsIn, withoutPair } from './pair-bands.ts';

/** A take with its estimated misfit in dB in the band where it is largest. */
export interface BentTake {
  readonly take: number;
  readonly misfit: number;
  /** Hertz. */
  readonly from: number;
  readonly to: number;
}

/** The slope of the misfit over the fitted level at one end of the level range. Numbers are NaN where it cannot be tested. */
export interface EndSlope {
  readonly end: 'upper' | 'lower';
  /** Part of the pairs (pairs and bands, where several bands are taken together) that lies beyond `begins`, a fitted level in dB. */
  readonly part: number;
  readonly begins: number;
  /** Decibels of misfit per decibel of fitted level beyond `begins`, outwards, with its standard uncertainty and degrees of freedom. */
  readonly slope: number;
  readonly uncertainty: number;
  readonly dof: number;
  /** One-sided: the upper end against compression, the lower end against lifting. Not corrected for the number of tests. */
  readonly pValue: number;
  /**
   * The largest p when each of the pairs that speak loudest is left out in turn: one pair that stands off is no question of
   * level. 1 where nothing would be left to test, or where p itself shows nothing.
   */
  readonly pWithoutPair: number;
  /** Takes whose estimated misfit exceeds the scatter of a pair mean in its band, worst first. */
  readonly takes: readonly BentTake[];
}

/** Above this p no pair is left out, as there is nothing to lose. Common practice, no source: 5 %. */
const WORTH_A_LOOK = 0.05;

/**
 * Fits one more term to the pair means of some bands, the same for all of them: 0 for all levels but the outermost `part`,
 * and rising from there on.
 * For a single band the test is exact for normal scatter, as any function of the fitted levels may take the place of
 * Tukey's square: Milliken & Graybill 1970, J. Amer. Statist. Assoc. 65, 797–807 (recalled from memory). Several bands
 * are correlated as they are seen to be at each distance between bands.
 * Cost: pairs × bands².
 */
export function endSlope(bands: readonly PairBand[], end: 'upper' | 'lower', part: number): EndSlope {
  const sign = end === 'upper' ? 1 : -1;
  const outwards = bands.flatMap(({ fitted }) => Array.from(fitted, (level) => sign * level));
  const begins = outwards.sort((a, b) => b - a)[Math.ceil(part * outwards.length)];
  const fit = begins === undefined ? undefined : fitTerm(bands, sign, begins);
  if (begins === undefined || fit === undefined) return { ...UNTESTED, end, part };
  const { slope, uncertainty, dof } = fit;
  const pValue = oneSided(fit, sign);
  const without = (pair: number) => {
    const rest = fitTerm(
      bands.map((band) => withoutPair(band, pair)),
      sign,
      begins,
    );
    return rest === undefined ? 1 : oneSided(rest, sign);
  };
  return {
    end,
    part,
    begins: sign * begins,
    slope,
    uncertainty,
    dof,
    pValue,
    pWithoutPair: pValue > WORTH_A_LOOK ? 1 : fit.loudest.reduce((most, pair) => Math.max(most, without(pair)), pValue),
    takes: bentTakes(fit),
  };
}

const UNTESTED = {
  begins: Number.NaN,
  slope: Number.NaN,
  uncertainty: Number.NaN,
  dof: 0,
  pValue: Number.NaN,
  pWithoutPair: Number.NaN,
  takes: [],
};

interface TermFit {
  readonly slope: number;
  readonly uncertainty: number;
  readonly dof: number;
  /** The term itself, and the scatter of a pair mean beside it in dB; an entry a band that tells something. */
  readonly used: readonly { readonly band: PairBand; readonly term: Float64Array; readonly scatter: number }[];
  /** Numbers of the pairs that add most to the slope, or stand off most, which bends the fit of the others. */
  readonly loudest: readonly number[];
}

// Compression at the top and lifting at the bottom have opposite signs; the tail is the one of the fault looked for.
function oneSided({ slope, uncertainty, dof }: TermFit, sign: 1 | -1): number {
  return studentUpper((-sign * slope) / uncertainty, dof);
}

/** Below this part of its size, what the links leave of the term, or the scatter, is rounding. */
const VISIBLE = 1e-9;

function fitTerm(bands: readonly PairBand[], sign: 1 | -1, begins: number): TermFit | undefined {
  const seenBands = bands.flatMap((band) => {
    const term = band.fitted.map((level) => Math.max(0, sign * level - begins));
    const seen = residualsIn(band, term);
    const isVisible = squaresOf(seen) > VISIBLE ** 2 * squaresOf(term);
    return isVisible && band.dof > 1 ? [{ band, term, seen, variance: squaresOf(band.residuals) / band.dof }] : [];
  });
  if (seenBands.length === 0) return undefined;
  // A band that happens to scatter little must not count for all of them.
  const usual = median(seenBands.map(({ variance }) => variance));
  const weights = seenBands.map(({ variance }) => 1 / (variance + usual || 1));
  let [cross, size] = [0, 0];
  const speaks = new Map<number, number>();
  seenBands.forEach(({ band, seen }, b) => {
    size += weights[b]! * squaresOf(seen);
    seen.forEach((value, p) => {
      const product = weights[b]! * value * band.residuals[p]!;
      cross += product;
      speaks.set(band.numbers[p]!, (speaks.get(band.numbers[p]!) ?? 0) + product);
    });
  });
  const slope = cross / size;
  // The slope takes one degree of freedom from all bands together.
  const taken = 1 / seenBands.length;
  const used = seenBands.map(({ band, term, seen }, b) => {
    const rest = band.residuals.map((residual, p) => residual - slope * seen[p]!);
    const dof = band.dof - taken;
    return { band, term, seen, rest, dof, weight: weights[b]!, scatter: Math.sqrt(squaresOf(rest) / dof) };
  });
  const { variance, dof } = varianceOfSum(used);
  const total = used.reduce((sum, { band }) => sum + squaresOf(band.levels), 0);
  if (!(variance > 0) || used.every(({ rest }) => squaresOf(rest) <= VISIBLE ** 2 * total)) return undefined;
  const loudest = [
    ...largest(new Map([...speaks].map(([number, product]) => [number, product * Math.sign(cross)])), LOUDEST),
    ...largest(squaresByPair(seenBands, weights), 1),
  ];
  return { slope, uncertainty: Math.sqrt(variance) / size, dof, used, loudest: [...new Set(loudest)] };
}

/** Pairs that are left out one at a time, to see whether one of them is all. */
const LOUDEST = 3;

function largest(values: ReadonlyMap<number, number>, count: number): number[] {
  const sorted = [...values].sort(([, a], [, b]) => b - a);
  return sorted.slice(0, count).map(([number]) => number);
}

function squaresByPair(bands: readonly { readonly band: PairBand }[], weights: readonly number[]): Map<number, number> {
  const squares = new Map<number, number>();
  bands.forEach(({ band: { numbers, residuals } }, b) => {
    numbers.forEach((number, p) => {
      squares.set(number, (squares.get(number) ?? 0) + weights[b]! * residuals[p]! ** 2);
    });
  });
  return squares;
}

interface UsedBand {
  readonly band: PairBand;
  readonly seen: Float64Array;
  readonly rest: Float64Array;
  readonly dof: number;
  readonly weight: number;
  readonly scatter: number;
}

/** Variance of Σ weight · seen · residual over all bands, and the degrees of freedom behind it. */
function varianceOfSum(used: readonly UsedBand[]): { variance: number; dof: number } {
  const count = used.length;
  const pairs = 1 + used.reduce((most, { band }) => Math.max(most, ...band.numbers), -1);
  const sees = used.map((own) => onNumbers(own.band, own.seen, own.weight * own.scatter, pairs));
  const rests = used.map((own) => onNumbers(own.band, own.rest, own.scatter > 0 ? 1 / own.scatter : 0, pairs));
  const products = new Float64Array(count * count);
  const shared = new Float64Array(count);
  for (let b = 0; b < count; b++) {
    for (let c = b; c < count; c++) {
      products[b * count + c] = dot(rests[b]!, rests[c]!);
      products[c * count + b] = products[b * count + c]!;
      shared[c - b] = shared[c - b]! + (c === b ? 1 : 2) * dot(sees[b]!, sees[c]!);
    }
  }
  const correlation = correlationByDistance(products, used);
  const series = Float64Array.from(used, ({ dof }) => dof);
  const meanDof = series.reduce((sum, dof) => sum + dof, 0) / count;
  return { variance: dot(correlation, shared), dof: meanDof * effectiveCount(products, series) };
}

/** Correlation of pair means a number of bands apart; never below 0, so that opposite bands earn nothing. */
function correlationByDistance(products: Float64Array, used: readonly UsedBand[]): Float64Array {
  const count = used.length;
  return Float64Array.from({ length: count }, (_, distance) => {
    let [sum, dof] = [0, 0];
    for (let b = 0; b + distance < count; b++) {
      sum += products[b * count + b + distance]!;
      dof += Math.min(used[b]!.dof, used[b + distance]!.dof);
    }
    return distance === 0 ? 1 : Math.max(0, sum / dof);
  });
}

/** Values by the numbers of their pairs; 0 for pairs that the band does not have. */
function onNumbers({ numbers }: PairBand, values: Float64Array, scale: number, pairs: number): Float64Array {
  const all = new Float64Array(pairs);
  numbers.forEach((number, p) => {
    all[number] = scale * values[p]!;
  });
  return all;
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let k = 0; k < a.length; k++) sum += a[k]! * b[k]!;
  return sum;
}

function bentTakes({ slope, used }: TermFit): BentTake[] {
  const worst = new Map<number, BentTake>();
  for (const { band, term, scatter } of used) {
    band.chains.forEach(({ takes }, p) => {
      const misfit = slope * term[p]!;
      if (Math.abs(misfit) <= scatter) return;
      for (const take of takes) {
        if (Math.abs(misfit) <= Math.abs(worst.get(take)?.misfit ?? 0)) continue;
        worst.set(take, { take, misfit, from: band.from, to: band.to });
      }
    });
  }
  return [...worst.values()].sort((a, b) => Math.abs(b.misfit) - Math.abs(a.misfit) || a.take - b.take);
}

function squaresOf(values: Float64Array): number {
  return dot(values, values);
}

function median(values: readonly number[]): number {
  return [...values].sort((a, b) => a - b)[values.length >> 1]!;
}
