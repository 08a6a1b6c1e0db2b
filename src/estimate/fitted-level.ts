import { choleskyInPlace, choleskyInverse } from '../numeric/cholesky.ts';
import type { VarianceShares } from '../numeric/variance-shares.ts';
import type { ChainLayout } from './chain-groups.ts';
import type { Deviations } from './scatter-of-level.ts';

/** Means and fit of a level, as flat arrays: an entry a seating or a chain, times `columns` where it is a figure. */
export interface FittedLevel {
  readonly columns: number;
  readonly seatMean: Float64Array;
  /** Active takes of each seating. */
  readonly seatCount: Int32Array;
  /** Σ 1/variance of the seating's active takes by themselves. */
  readonly seatInformation: Float64Array;
  /** 1 / variance of the seating's mean under repeat and seating scatter; 0 without active takes. */
  readonly seatPrecision: Float64Array;
  readonly seatVariance: Float64Array;
  /** Σ precision of the seatings; 0 for a chain without active takes. */
  readonly chainPrecision: Float64Array;
  readonly chainMean: Float64Array;
  /** mean − fitted. */
  readonly chainResidual: Float64Array;
  readonly chainPartner: Float64Array;
  /** 1 / (partner variance + 1 / precision). */
  readonly chainWeight: Float64Array;
  /** Factor of variance of the chain's fitted value, x C xᵀ. */
  readonly leverageFactor: Float64Array;
}

/** @param variances of one take each, or what is proportional to them: takes of a seating weigh by their inverse. */
export function meansOfSeats(
  layout: ChainLayout,
  { values, columns, active }: Deviations,
  variances: Float64Array,
): FittedLevel {
  const seats = layout.takes.length;
  const chains = layout.groups.length;
  const seatMean = new Float64Array(seats * columns);
  const seatCount = new Int32Array(seats);
  const weights = new Float64Array(seats);
  for (let t = 0; t < active.length; t++) {
    if (!active[t]) continue;
    const seat = layout.seatOf[t]!;
    const weight = 1 / variances[t]!;
    seatCount[seat] = seatCount[seat]! + 1;
    weights[seat] = weights[seat]! + weight;
    for (let c = 0; c < columns; c++) {
      seatMean[seat * columns + c] = seatMean[seat * columns + c]! + weight * values[t * columns + c]!;
    }
  }
  for (let seat = 0; seat < seats; seat++) {
    for (let c = 0; c < columns && seatCount[seat]! > 0; c++) {
      seatMean[seat * columns + c] = seatMean[seat * columns + c]! / weights[seat]!;
    }
  }
  return {
    columns,
    seatMean,
    seatCount,
    seatInformation: new Float64Array(seats),
    seatPrecision: new Float64Array(seats),
    seatVariance: new Float64Array(chains),
    chainPrecision: new Float64Array(chains),
    chainMean: new Float64Array(chains * columns),
    chainResidual: new Float64Array(chains * columns),
    chainPartner: new Float64Array(chains),
    chainWeight: new Float64Array(chains),
    leverageFactor: new Float64Array(chains),
  };
}

/** Sets the precisions of seatings and chains, and the chains' means. */
export function weighSeats(
  layout: ChainLayout,
  fitted: FittedLevel,
  active: readonly boolean[],
  variances: Float64Array,
  seating: VarianceShares | undefined,
): void {
  const { columns, seatMean, seatInformation, seatPrecision, seatVariance, chainPrecision, chainMean } = fitted;
  for (let t = 0; t < active.length; t++) {
    if (!active[t]) continue;
    const seat = layout.seatOf[t]!;
    seatInformation[seat] = seatInformation[seat]! + 1 / variances[t]!;
  }
  layout.groups.forEach(({ ends }, chain) => {
    const variance = seating === undefined ? 0 : seating.shares[ends[0]]! + seating.shares[ends[1]]!;
    seatVariance[chain] = variance;
    const [from, to] = [layout.seatStart[chain]!, layout.seatStart[chain + 1]!];
    let total = 0;
    for (let seat = from; seat < to; seat++) {
      const own = seatInformation[seat]!;
      seatPrecision[seat] = own > 0 ? 1 / (variance + 1 / own) : 0;
      total += seatPrecision[seat]!;
    }
    chainPrecision[chain] = total;
    for (let seat = from; seat < to; seat++) {
      const part = total > 0 ? seatPrecision[seat]! / total : 0;
      for (let c = 0; c < columns; c++) {
        chainMean[chain * columns + c] = chainMean[chain * columns + c]! + part * seatMean[seat * columns + c]!;
      }
    }
  });
}

/** Sets the partner variances, and with them the chains' weights. */
export function setPartners(layout: ChainLayout, fitted: FittedLevel, partner: VarianceShares | undefined): void {
  layout.groups.forEach(({ ends }, chain) => {
    const variance = partner === undefined ? 0 : partner.shares[ends[0]]! + partner.shares[ends[1]]!;
    const precision = fitted.chainPrecision[chain]!;
    fitted.chainPartner[chain] = variance;
    fitted.chainWeight[chain] = precision > 0 ? 1 / (variance + 1 / precision) : 0;
  });
}

/** Part of the mean diagonal added to the normal matrix, so that what the takes leave open does no harm. */
const RIDGE = 1e-9;

/**
 * Fits n links to the chains' means with the chains' weights; returns the degrees of freedom left.
 * @param factors multiply the weights; a chain with 0 has no part in the fit and is held against it all the same.
 */
export function fitChains(layout: ChainLayout, fitted: FittedLevel, n: number, factors?: Float64Array): number {
  const { columns, chainMean, chainResidual, leverageFactor } = fitted;
  const chainWeight = factors === undefined ? fitted.chainWeight : fitted.chainWeight.map((w, c) => w * factors[c]!);
  const inverse = inverseNormal(layout, chainWeight, n);
  const side = new Float64Array(n * columns);
  layout.groups.forEach(({ links, factors }, chain) => {
    for (let k = 0; k < links.length; k++) {
      const weighted = chainWeight[chain]! * factors[k]!;
      const row = links[k]! * columns;
      for (let c = 0; c < columns; c++) side[row + c] = side[row + c]! + weighted * chainMean[chain * columns + c]!;
    }
  });
  const estimates = new Float64Array(n * columns);
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) {
      const entry = inverse[i * n + j]!;
      for (let c = 0; c < columns; c++) {
        estimates[i * columns + c] = estimates[i * columns + c]! + entry * side[j * columns + c]!;
      }
    }
  }
  let left = 0;
  layout.groups.forEach(({ links, factors }, chain) => {
    if (!(fitted.chainWeight[chain]! > 0)) return;
    for (let c = 0; c < columns; c++) {
      let rest = chainMean[chain * columns + c]!;
      for (let k = 0; k < links.length; k++) rest -= factors[k]! * estimates[links[k]! * columns + c]!;
      chainResidual[chain * columns + c] = rest;
    }
    let factor = 0;
    for (let k = 0; k < links.length; k++) {
      for (let l = 0; l < links.length; l++) factor += factors[k]! * factors[l]! * inverse[links[k]! * n + links[l]!]!;
    }
    leverageFactor[chain] = factor;
    if (chainWeight[chain]! > 0) left += 1 - chainWeight[chain]! * factor;
  });
  return left;
}

/** (Σ weight · x xᵀ)⁻¹ over all chains, with a trace of a ridge. */
export function inverseNormal(layout: ChainLayout, chainWeight: Float64Array, n: number): Float64Array {
  const normal = new Float64Array(n * n);
  layout.groups.forEach(({ links, factors }, chain) => {
    for (let k = 0; k < links.length; k++) {
      const weighted = chainWeight[chain]! * factors[k]!;
      for (let l = 0; l < links.length; l++) {
        const cell = links[k]! * n + links[l]!;
        normal[cell] = normal[cell]! + weighted * factors[l]!;
      }
    }
  });
  let trace = 0;
  for (let i = 0; i < n; i++) trace += normal[i * n + i]!;
  // Nothing active anywhere: any positive matrix will do.
  const ridge = trace > 0 ? (RIDGE * trace) / n : 1;
  for (let i = 0; i < n; i++) normal[i * n + i] = normal[i * n + i]! + ridge;
  const inverse = new Float64Array(n * n);
  if (!choleskyInPlace(normal, n)) throw new Error('a normal matrix with a ridge has no positive factor');
  choleskyInverse(normal, n, inverse, new Float64Array(n * n));
  return inverse;
}
