import { neighbourCorrelation, shareForVariance } from '../numeric/effective-share.ts';
import { robustVarianceShares, type SquaredContrast, type VarianceShares } from '../numeric/variance-shares.ts';
import type { ChainLayout } from './chain-groups.ts';
import { type FittedLevel, fitChains, meansOfSeats, setPartners, weighSeats } from './fitted-level.ts';
import { knownOfChains } from './known-of-chains.ts';

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
  /**
   * Variance (dB²) of each take's figure as the user gives it; 0 where nothing is given. Where repeats tell the variance,
   * only its differences between takes count.
   */
  readonly givenVariance: Float64Array;
}

/**
 * What scatters between takes: repeats (one variance), seatings and partners (a share of each end of the chain), each
 * undisturbed by single wild takes. Variances in dB² of one column.
 */
export interface LevelScatter {
  readonly repeatVariance: number;
  /** The same for each take, where the user gives it take by take. */
  readonly takeVariance: Float64Array;
  /** 0 where there are no repeats; Infinity where the user gives the variance. */
  readonly repeatDof: number;
  /** Shares a link; undefined where no chain was seated twice. */
  readonly seating: VarianceShares | undefined;
  /** Shares a link; undefined where the additive model leaves too few degrees of freedom to tell. */
  readonly partner: VarianceShares | undefined;
  /** Degrees of freedom that the chains' means leave over the additive model, a column. */
  readonly partnerDof: number;
  /** Whether any scatter is known at all: without it nothing can be judged. */
  readonly isKnown: boolean;
  readonly fitted: FittedLevel;
  readonly deviations: Deviations;
}

/** Fewer degrees of freedom than this cannot tell a partner scatter from a single wild chain. Common practice, no source. */
const FEWEST_PARTNER_DOF = 8;

/** A redundancy below this is rounding. */
export const UNCHECKED = 1e-6;

/** A variance below this (1e-6 dB squared) is rounding of the levels. */
const ROUNDING = 1e-12;

/**
 * Estimates the scatter of a level of deviations from the additive model (n links).
 * Cost: takes × columns, plus links³ a pass.
 */
export function scatterOfLevel(layout: ChainLayout, n: number, deviations: Deviations): LevelScatter {
  const { givenVariance, active } = deviations;
  const given = meanOfActive(givenVariance, active);
  const relative = givenVariance.map((variance) => (variance > 0 && given > 0 ? variance / given : 1));
  const fitted = meansOfSeats(layout, deviations, relative);
  const repeat = repeatVariance(layout, fitted, deviations, relative);
  const repeatOrGiven = Math.max(ROUNDING, repeat.dof > 0 ? repeat.variance : given);
  const takeVariance = relative.map((part) => Math.max(ROUNDING, part * repeatOrGiven));
  weighSeats(layout, fitted, active, takeVariance, undefined);
  const seating = seatingShares(layout, fitted, n);
  fitted.seatInformation.fill(0);
  fitted.chainMean.fill(0);
  weighSeats(layout, fitted, active, takeVariance, seating);
  const lowerIsKnown = repeatOrGiven > ROUNDING || (seating?.shares.some((share) => share > ROUNDING) ?? false);
  const { partner, partnerDof } = fitPartners(layout, fitted, n, lowerIsKnown, seating);
  return {
    repeatVariance: repeatOrGiven,
    takeVariance,
    repeatDof: repeat.dof > 0 ? repeat.dof : given > 0 ? Number.POSITIVE_INFINITY : 0,
    seating,
    partner,
    partnerDof,
    isKnown: lowerIsKnown || (partner?.shares.some((share) => share > ROUNDING) ?? false),
    fitted,
    deviations,
  };
}

function meanOfActive(values: Float64Array, active: readonly boolean[]): number {
  let sum = 0;
  let count = 0;
  for (let t = 0; t < active.length; t++) {
    if (!active[t]) continue;
    sum += values[t]!;
    count++;
  }
  return count > 0 ? sum / count : 0;
}

/** The same scatter with other takes active: only the links are fitted again. */
export function refitLevel(
  layout: ChainLayout,
  n: number,
  scatter: LevelScatter,
  active: readonly boolean[],
): LevelScatter {
  const deviations = { ...scatter.deviations, active };
  const fitted = meansOfSeats(layout, deviations, scatter.takeVariance);
  weighSeats(layout, fitted, active, scatter.takeVariance, scatter.seating);
  setPartners(layout, fitted, scatter.partner);
  const partnerDof = fitChains(layout, fitted, n);
  return { ...scatter, fitted, deviations, partnerDof };
}

/**
 * How many of the columns count as independent in a mean square: the columns of a level are neighbours along frequency,
 * and each step of the ladder has a correlation of its own. Repeats are mostly white, what a seating changes is smooth.
 */
function independentColumns(rows: Float64Array, count: number, columns: number): number {
  if (columns === 1) return 1;
  return columns * shareForVariance(neighbourCorrelation(rows, count, columns), columns);
}

// One variance for all repeats: wild groups are left out by the same rule as for shares, with a single member.
function repeatVariance(
  layout: ChainLayout,
  { seatMean, seatCount }: FittedLevel,
  deviations: Deviations,
  relative: Float64Array,
) {
  const { values, columns, active } = deviations;
  const rows = new Float64Array(active.length * columns);
  const groups: { square: number; dof: number }[] = [];
  let series = 0;
  layout.takes.forEach((takes, seat) => {
    const count = seatCount[seat]!;
    if (count < 2) return;
    let squares = 0;
    for (const t of takes) {
      if (!active[t]) continue;
      for (let c = 0; c < columns; c++) {
        const rest = (values[t * columns + c]! - seatMean[seat * columns + c]!) / Math.sqrt(relative[t]!);
        rows[series * columns + c] = rest;
        squares += rest * rest;
      }
      series++;
    }
    groups.push({ square: squares / (count - 1) / columns, dof: count - 1 });
  });
  if (groups.length === 0) return { variance: 0, dof: 0 };
  const independent = independentColumns(rows, series, columns);
  const contrasts = groups.map(({ square, dof }) => ({ a: 0, b: 0, square, dof: dof * independent, known: 0 }));
  const { shares, used } = robustVarianceShares(contrasts, 1);
  return { variance: 2 * shares[0]!, dof: used.reduce((sum, contrast) => sum + contrast.dof, 0) };
}

function seatingShares(layout: ChainLayout, fitted: FittedLevel, n: number) {
  const { seatMean, seatCount, seatInformation, columns } = fitted;
  const rows = new Float64Array(layout.takes.length * columns);
  let series = 0;
  const found: SquaredContrast[] = [];
  layout.groups.forEach(({ ends: [a, b] }, chain) => {
    const seats: number[] = [];
    for (let seat = layout.seatStart[chain]!; seat < layout.seatStart[chain + 1]!; seat++) {
      if (seatCount[seat]! > 0) seats.push(seat);
    }
    if (seats.length < 2) return;
    let squares = 0;
    for (const seat of seats) {
      for (let c = 0; c < columns; c++) {
        let mean = 0;
        for (const other of seats) mean += seatMean[other * columns + c]! / seats.length;
        const rest = seatMean[seat * columns + c]! - mean;
        rows[series * columns + c] = rest;
        squares += rest * rest;
      }
      series++;
    }
    const dof = seats.length - 1;
    const known = seats.reduce((sum, seat) => sum + 1 / seatInformation[seat]!, 0) / seats.length;
    found.push({ a, b, square: squares / dof / columns, dof, known });
  });
  if (found.length === 0) return undefined;
  const independent = independentColumns(rows, series, columns);
  return robustVarianceShares(
    found.map((contrast) => ({ ...contrast, dof: contrast.dof * independent })),
    n,
  );
}

const PARTNER_PASSES = 3;
/** Without repeats, seatings or a given uncertainty even a few degrees of freedom must serve, as one scatter for all. */
const FEWEST_ONLY_DOF = 2;

function fitPartners(
  layout: ChainLayout,
  fitted: FittedLevel,
  n: number,
  lowerIsKnown: boolean,
  seating: VarianceShares | undefined,
) {
  let partner: VarianceShares | undefined;
  setPartners(layout, fitted, undefined);
  let partnerDof = fitChains(layout, fitted, n);
  if (partnerDof < FEWEST_PARTNER_DOF) {
    if (!lowerIsKnown && partnerDof >= FEWEST_ONLY_DOF) partner = oneForAll(fitted, n, partnerDof);
    if (partner !== undefined) setPartners(layout, fitted, partner);
    return { partner, partnerDof };
  }
  // Shares are judged by residuals of a fit in which wild chains have no part: else one bad take smears over all others.
  let factors = robustFactors(layout, fitted, n);
  for (let pass = 0; pass < PARTNER_PASSES; pass++) {
    const contrasts = partnerContrasts(layout, fitted, seating, factors);
    const robust = robustVarianceShares(contrasts, n);
    partner = robust;
    setPartners(layout, fitted, partner);
    const used = new Set(robust.used);
    factors = new Float64Array(layout.groups.length).fill(1);
    for (const contrast of contrasts) if (!used.has(contrast)) factors[contrast.chain] = 0;
    fitChains(layout, fitted, n, factors);
  }
  partnerDof = fitChains(layout, fitted, n);
  return { partner, partnerDof };
}

const ABSOLUTE_PASSES = 8;

/**
 * Factors on the weights that make least squares a fit of least absolute residuals, by reweighting; the residuals of that
 * fit are left in place. Source: Huber, Robust Statistics, 1981, section 7.8.
 */
function robustFactors(layout: ChainLayout, fitted: FittedLevel, n: number): Float64Array {
  const chains = layout.groups.length;
  const { columns, chainResidual, chainPrecision } = fitted;
  let factors = new Float64Array(chains).fill(1);
  for (let pass = 0; pass < ABSOLUTE_PASSES; pass++) {
    const sizes = Float64Array.from({ length: chains }, (_, chain) => {
      if (!(chainPrecision[chain]! > 0)) return Number.NaN;
      let squares = 0;
      for (let c = 0; c < columns; c++) squares += chainResidual[chain * columns + c]! ** 2;
      return Math.sqrt(squares / columns);
    });
    const known = sizes.filter((size) => !Number.isNaN(size)).sort();
    const typical = known[known.length >> 1] ?? 0;
    if (!(typical > 0)) break;
    factors = sizes.map((size) => (Number.isNaN(size) ? 0 : 1 / Math.max(1, size / (ABSOLUTE_FLOOR * typical))));
    fitChains(layout, fitted, n, factors);
  }
  return factors;
}

/** Residuals below this part of the typical one weigh alike, so that a few that are met exactly do not carry the fit. */
const ABSOLUTE_FLOOR = 0.5;

/** A squared deviation with the chain that it is of. */
export interface ChainContrast extends SquaredContrast {
  readonly chain: number;
}

/** What each chain's mean leaves over the additive model, as a squared deviation of its two ends. */
export function partnerContrasts(
  layout: ChainLayout,
  fitted: FittedLevel,
  seating: VarianceShares | undefined,
  factors?: Float64Array,
): ChainContrast[] {
  const { columns, chainPrecision, chainResidual, chainWeight, leverageFactor } = fitted;
  const independent = independentColumns(chainResidual, layout.groups.length, columns);
  const known = knownOfChains(layout, fitted, seating);
  const contrasts: ChainContrast[] = [];
  layout.groups.forEach(({ ends: [a, b] }, chain) => {
    if (!(chainPrecision[chain]! > 0)) return;
    // A chain in the fit keeps the part 1 − leverage of its variance; to one outside the fit that of the fit is added.
    const part = factors?.[chain] ?? 1;
    const leverage = chainWeight[chain]! * leverageFactor[chain]!;
    const left = 1 + leverage * (1 - 2 * part);
    if (left < UNCHECKED) return;
    let squares = 0;
    for (let c = 0; c < columns; c++) squares += chainResidual[chain * columns + c]! ** 2;
    contrasts.push({
      chain,
      a,
      b,
      square: squares / columns / left,
      dof: Math.min(1, left) * independent,
      known: known[chain]!,
    });
  });
  return contrasts;
}

function oneForAll({ chainResidual, columns }: FittedLevel, n: number, dof: number): VarianceShares {
  const squares = chainResidual.reduce((sum, value) => sum + value * value, 0);
  return { shares: new Float64Array(n).fill(squares / columns / dof / 2), dof: new Float64Array(n).fill(dof) };
}
