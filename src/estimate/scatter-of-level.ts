import { choleskyInPlace, choleskyInverse } from '../numeric/cholesky.ts';
import { neighbourCorrelation, shareForVariance } from '../numeric/effective-share.ts';
import { robustVarianceShares, type SquaredContrast, type VarianceShares } from '../numeric/variance-shares.ts';
import type { ChainGroup } from './chain-groups.ts';

/**
 * Deviations of takes in one figure each (a mean over a band, say) or in several columns of like scatter.
 * Row t of `values` starts at t · columns.
 */
export interface Deviations {
  readonly values: Float64Array;
  readonly columns: number;
  /** Whether take t has a complete row. */
  readonly present: readonly boolean[];
  /** Whether take t takes part; only takes that are present do. */
  readonly active: readonly boolean[];
  /** Variance (dB²) of one take's figure as the user gives it; 0 where nothing is given. Used where repeats tell none. */
  readonly givenVariance: number;
}

/** A seating of a chain with its active takes. */
export interface Seat {
  readonly takes: readonly number[];
  readonly mean: Float64Array;
  /** 1 / variance of the seating's mean under repeat and seating scatter. */
  precision: number;
}

export interface Chain {
  readonly group: ChainGroup;
  readonly seats: readonly Seat[];
  /** Σ precision of the seatings. */
  precision: number;
  /** Partner variance, and the weight 1 / (partner variance + 1 / precision). */
  partner: number;
  weight: number;
  mean: Float64Array;
  /** mean − fitted. */
  residual: Float64Array;
  /** Factor of variance of the chain's fitted value, x C xᵀ. */
  leverageFactor: number;
}

/**
 * What scatters between takes: repeats (one variance), seatings and partners (a share of each end of the chain), each
 * undisturbed by single wild takes. Variances in dB² of one column.
 */
export interface LevelScatter {
  readonly repeatVariance: number;
  /** 0 where there are no repeats. */
  readonly repeatDof: number;
  /** Shares a link; undefined where no chain was seated twice. */
  readonly seating: VarianceShares | undefined;
  /** Shares a link; undefined where the additive model leaves too few degrees of freedom to tell. */
  readonly partner: VarianceShares | undefined;
  /** Degrees of freedom that the chains' means leave over the additive model, a column. */
  readonly partnerDof: number;
  /** Whether any scatter is known at all: without it nothing can be judged. */
  readonly isKnown: boolean;
  readonly chains: readonly Chain[];
  readonly deviations: Deviations;
}

/** Fewer degrees of freedom than this cannot tell a partner scatter from a single wild chain. Common practice, no source. */
export const FEWEST_PARTNER_DOF = 8;

/** A variance below this (1e-6 dB squared) is rounding of the levels. */
const ROUNDING = 1e-12;

/**
 * Estimates the scatter of a level of deviations from the additive model in `groups` (n links).
 * Cost: takes × columns, plus links³ a pass.
 */
export function scatterOfLevel(groups: readonly ChainGroup[], n: number, deviations: Deviations): LevelScatter {
  const { columns } = deviations;
  const chains = chainsOf(groups, deviations);
  const repeat = repeatVariance(chains, deviations);
  const repeatOrGiven = Math.max(ROUNDING, repeat.dof > 0 ? repeat.variance : deviations.givenVariance);
  const seating = seatingShares(chains, n, repeatOrGiven, columns);
  weighSeats(chains, repeatOrGiven, seating, columns);
  const known = repeat.dof > 0 || deviations.givenVariance > 0 || seating !== undefined;
  const { partner, partnerDof } = fitPartners(chains, n, columns, known);
  return {
    repeatVariance: repeatOrGiven,
    repeatDof: repeat.dof > 0 ? repeat.dof : deviations.givenVariance > 0 ? Number.POSITIVE_INFINITY : 0,
    seating,
    partner,
    partnerDof,
    isKnown: known || partner !== undefined,
    chains,
    deviations,
  };
}

/** The same scatter with other takes active: only the links are fitted again. */
export function refitLevel(
  groups: readonly ChainGroup[],
  n: number,
  scatter: LevelScatter,
  active: readonly boolean[],
): LevelScatter {
  const deviations = { ...scatter.deviations, active };
  const chains = chainsOf(groups, deviations);
  weighSeats(chains, scatter.repeatVariance, scatter.seating, deviations.columns);
  weighChains(chains, scatter.partner ?? { shares: new Float64Array(n), dof: new Float64Array(n) });
  const partnerDof = fitLinks(chains, n, deviations.columns);
  return { ...scatter, chains, deviations, partnerDof };
}

function weighSeats(chains: Chain[], repeat: number, seating: VarianceShares | undefined, columns: number): void {
  for (const chain of chains) {
    const [a, b] = chain.group.ends;
    const variance = seating === undefined ? 0 : seating.shares[a]! + seating.shares[b]!;
    chain.precision = 0;
    for (const seat of chain.seats) {
      seat.precision = 1 / (variance + repeat / seat.takes.length);
      chain.precision += seat.precision;
    }
    chain.mean = seatMean(chain, columns);
  }
}

function chainsOf(groups: readonly ChainGroup[], deviations: Deviations): Chain[] {
  return groups.map((group) => chainOf(group, deviations)).filter((chain) => chain !== undefined);
}

function chainOf(group: ChainGroup, { values, columns, active }: Deviations): Chain | undefined {
  const seats: Seat[] = [];
  for (const seating of group.seatings) {
    const takes = seating.filter((t) => active[t]);
    if (takes.length === 0) continue;
    const mean = new Float64Array(columns);
    for (const t of takes)
      for (let c = 0; c < columns; c++) mean[c] = mean[c]! + values[t * columns + c]! / takes.length;
    seats.push({ takes, mean, precision: 0 });
  }
  if (seats.length === 0) return undefined;
  const empty = new Float64Array(columns);
  return { group, seats, precision: 0, partner: 0, weight: 0, mean: empty, residual: empty, leverageFactor: 0 };
}

function seatMean(chain: Chain, columns: number): Float64Array {
  const mean = new Float64Array(columns);
  for (const seat of chain.seats) {
    const part = seat.precision / chain.precision;
    for (let c = 0; c < columns; c++) mean[c] = mean[c]! + part * seat.mean[c]!;
  }
  return mean;
}

/**
 * How many of the columns count as independent in a mean square: the columns of a level are neighbours along frequency,
 * and each step of the ladder has a correlation of its own. Repeats are mostly white, what a seating changes is smooth.
 */
function independentColumns(series: readonly Float64Array[], columns: number): number {
  if (columns === 1) return 1;
  const rho = neighbourCorrelation(concatenated(series, columns), series.length, columns);
  return 1 + (columns - 1) * shareForVariance(rho);
}

function concatenated(series: readonly Float64Array[], columns: number): Float64Array {
  const matrix = new Float64Array(series.length * columns);
  series.forEach((row, r) => {
    matrix.set(row, r * columns);
  });
  return matrix;
}

// One variance for all repeats: wild groups are left out by the same rule as for shares, with a single member.
function repeatVariance(chains: readonly Chain[], { values, columns }: Deviations) {
  const series: Float64Array[] = [];
  const groups: { square: number; dof: number }[] = [];
  for (const { seats } of chains) {
    for (const { takes, mean } of seats) {
      if (takes.length < 2) continue;
      let squares = 0;
      for (const t of takes) {
        const own = mean.map((value, c) => values[t * columns + c]! - value);
        squares += sumOfSquares(own);
        series.push(own);
      }
      groups.push({ square: squares / (takes.length - 1) / columns, dof: takes.length - 1 });
    }
  }
  if (groups.length === 0) return { variance: 0, dof: 0 };
  const independent = independentColumns(series, columns);
  const contrasts = groups.map(({ square, dof }) => ({ a: 0, b: 0, square, dof: dof * independent, known: 0 }));
  const { shares, used } = robustVarianceShares(contrasts, 1);
  return { variance: 2 * shares[0]!, dof: used.reduce((sum, contrast) => sum + contrast.dof, 0) };
}

function seatingShares(chains: readonly Chain[], n: number, repeat: number, columns: number) {
  const series: Float64Array[] = [];
  const found: SquaredContrast[] = [];
  for (const { group, seats } of chains) {
    if (seats.length < 2) continue;
    const mean = new Float64Array(columns);
    for (const seat of seats) for (let c = 0; c < columns; c++) mean[c] = mean[c]! + seat.mean[c]! / seats.length;
    let squares = 0;
    for (const seat of seats) {
      const own = seat.mean.map((value, c) => value - mean[c]!);
      squares += sumOfSquares(own);
      series.push(own);
    }
    const dof = seats.length - 1;
    const known = seats.reduce((sum, seat) => sum + repeat / seat.takes.length, 0) / seats.length;
    const [a, b] = group.ends;
    found.push({ a, b, square: squares / dof / columns, dof, known });
  }
  if (found.length === 0) return undefined;
  const independent = independentColumns(series, columns);
  return robustVarianceShares(
    found.map((contrast) => ({ ...contrast, dof: contrast.dof * independent })),
    n,
  );
}

const PARTNER_PASSES = 3;
/** Without repeats, seatings or a given uncertainty even a few degrees of freedom must serve, as one scatter for all. */
const FEWEST_ONLY_DOF = 2;

function fitPartners(chains: readonly Chain[], n: number, columns: number, lowerIsKnown: boolean) {
  for (const chain of chains) chain.weight = chain.precision;
  let partnerDof = fitLinks(chains, n, columns);
  let partner: VarianceShares | undefined;
  if (partnerDof < FEWEST_PARTNER_DOF) {
    if (!lowerIsKnown && partnerDof >= FEWEST_ONLY_DOF) partner = oneForAll(chains, n, columns, partnerDof);
    if (partner !== undefined) weighChains(chains, partner);
    return { partner, partnerDof };
  }
  for (let pass = 0; pass < PARTNER_PASSES; pass++) {
    const independent = independentColumns(
      chains.map((chain) => chain.residual),
      columns,
    );
    const contrasts: SquaredContrast[] = [];
    for (const chain of chains) {
      // Of a residual's variance 1/weight the part 1 − leverage is left; a leverage of 1 leaves nothing to judge by.
      const left = 1 - chain.weight * chain.leverageFactor;
      if (left < UNCHECKED) continue;
      const [a, b] = chain.group.ends;
      const square = sumOfSquares(chain.residual) / columns / left;
      contrasts.push({ a, b, square, dof: left * independent, known: 1 / chain.precision });
    }
    partner = robustVarianceShares(contrasts, n);
    weighChains(chains, partner);
    partnerDof = fitLinks(chains, n, columns);
  }
  return { partner, partnerDof };
}

function weighChains(chains: readonly Chain[], partner: VarianceShares): void {
  for (const chain of chains) {
    const [a, b] = chain.group.ends;
    chain.partner = partner.shares[a]! + partner.shares[b]!;
    chain.weight = 1 / (chain.partner + 1 / chain.precision);
  }
}

function oneForAll(chains: readonly Chain[], n: number, columns: number, dof: number): VarianceShares {
  const squares = chains.reduce((sum, chain) => sum + sumOfSquares(chain.residual), 0);
  const share = squares / columns / dof / 2;
  return { shares: new Float64Array(n).fill(share), dof: new Float64Array(n).fill(dof) };
}

function sumOfSquares(values: Float64Array): number {
  return values.reduce((sum, value) => sum + value * value, 0);
}

/** A redundancy below this is rounding. */
export const UNCHECKED = 1e-6;

/** Part of the mean diagonal added to the normal matrix, so that what the takes leave open does no harm. */
const RIDGE = 1e-9;

/** Fits the links to the chains' means with the chains' weights; returns the degrees of freedom left. */
function fitLinks(chains: readonly Chain[], n: number, columns: number): number {
  const normal = new Float64Array(n * n);
  for (const { group, weight } of chains) {
    group.links.forEach((i, k) => {
      group.links.forEach((j, l) => {
        normal[i * n + j] = normal[i * n + j]! + weight * group.factors[k]! * group.factors[l]!;
      });
    });
  }
  let trace = 0;
  for (let i = 0; i < n; i++) trace += normal[i * n + i]!;
  for (let i = 0; i < n; i++) normal[i * n + i] = normal[i * n + i]! + (RIDGE * trace) / n;
  const inverse = new Float64Array(n * n);
  if (!choleskyInPlace(normal, n)) throw new Error('a normal matrix with a ridge has no positive factor');
  choleskyInverse(normal, n, inverse, new Float64Array(n * n));

  const estimates = new Float64Array(n * columns);
  const side = new Float64Array(n * columns);
  for (const { group, weight, mean } of chains) {
    group.links.forEach((i, k) => {
      for (let c = 0; c < columns; c++)
        side[i * columns + c] = side[i * columns + c]! + weight * group.factors[k]! * mean[c]!;
    });
  }
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) {
      const entry = inverse[i * n + j]!;
      for (let c = 0; c < columns; c++) {
        estimates[i * columns + c] = estimates[i * columns + c]! + entry * side[j * columns + c]!;
      }
    }
  }
  let left = 0;
  for (const chain of chains) {
    const { links, factors } = chain.group;
    chain.residual = chain.mean.map((mean, c) =>
      links.reduce((rest, i, k) => rest - factors[k]! * estimates[i * columns + c]!, mean),
    );
    let factor = 0;
    links.forEach((i, k) => {
      links.forEach((j, l) => {
        factor += factors[k]! * factors[l]! * inverse[i * n + j]!;
      });
    });
    chain.leverageFactor = factor;
    left += 1 - chain.weight * factor;
  }
  return left;
}
