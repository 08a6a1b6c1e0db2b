import type { VarianceShares } from '../numeric/variance-shares.ts';
import type { ChainLayout } from './chain-groups.ts';
import { type LevelScatter, UNCHECKED } from './scatter-of-level.ts';

/** What takes show beyond what everything else says of them. Entries of takes that nothing checks are NaN. */
export interface TakeShifts {
  /** Decibels, entry (t, c) at t · columns + c. */
  readonly shift: Float64Array;
  /** Standard uncertainty in dB of each column of a take. */
  readonly uncertainty: Float64Array;
  /** Effective degrees of freedom of that uncertainty, worked out when asked for: few takes stand out enough to need them. */
  readonly dofOf: (take: number) => number;
}

/**
 * Shift of every active take by generalised least squares: with P = V⁻¹ − V⁻¹X(XᵀV⁻¹X)⁻¹XᵀV⁻¹ it is (P y)ₜ / Pₜₜ with
 * variance 1/Pₜₜ. V is made of repeat variance, seating variance shared by the takes of a seating, and partner variance
 * shared by those of a chain, so that P follows from seating and chain means in closed form.
 * Degrees of freedom by Welch–Satterthwaite over the parts that repeat, seating and partner have in the variance.
 * Source: mean-shift outlier model, Cook & Weisberg, Residuals and Influence in Regression, 1982, section 2.2.2, in its
 * generalised least-squares form; JCGM 100:2008, G.4.1.
 * @param only takes wanted; all where absent.
 */
export function shiftsOfTakes(layout: ChainLayout, scatter: LevelScatter, only?: readonly number[]): TakeShifts {
  const { columns, active } = scatter.deviations;
  const count = active.length;
  const shifts: TakeShifts = {
    shift: new Float64Array(count * columns).fill(Number.NaN),
    uncertainty: new Float64Array(count).fill(Number.NaN),
    dofOf: (take) => (Number.isNaN(shifts.uncertainty[take]!) ? Number.NaN : dofOfShift(layout, scatter, take)),
  };
  if (only === undefined) for (let t = 0; t < count; t++) shiftOf(layout, scatter, t, shifts);
  else for (const t of only) shiftOf(layout, scatter, t, shifts);
  return shifts;
}

function shiftOf(layout: ChainLayout, scatter: LevelScatter, take: number, into: TakeShifts): void {
  const { columns, values, active } = scatter.deviations;
  if (!active[take]) return;
  const { fitted } = scatter;
  const place = placeOf(layout, scatter, take);
  if (place === undefined) return;
  const { seat, chain, variance, h, spread, information } = place;
  for (let c = 0; c < columns; c++) {
    const seatMean = fitted.seatMean[seat * columns + c]!;
    const within = (values[take * columns + c]! - seatMean) / variance;
    const ofSeat =
      seatMean - fitted.chainMean[chain * columns + c]! + fitted.chainResidual[chain * columns + c]! / spread;
    into.shift[take * columns + c] = ((fitted.seatCount[seat] === 1 ? 0 : within) + h * ofSeat) / information;
  }
  into.uncertainty[take] = 1 / Math.sqrt(information);
}

/** A seating with this part of its chain is the only one; the rest is rounding. */
const ONLY_SEAT = 1 - 1e-12;

/** Where a take stands in its chain, and the information Pₜₜ on its shift; undefined where nothing checks it. */
interface TakePlace {
  readonly seat: number;
  readonly chain: number;
  /** Of the take by itself. */
  readonly variance: number;
  /** Its entry of V⁻¹1 within its seating. */
  readonly h: number;
  /** What the partner variance dampens; the part of the chain's weight that its fit leaves. */
  readonly spread: number;
  readonly left: number;
  readonly information: number;
}

function placeOf(layout: ChainLayout, { fitted, takeVariance }: LevelScatter, take: number): TakePlace | undefined {
  const seat = layout.seatOf[take]!;
  const chain = layout.chainOfSeat[seat]!;
  const variance = takeVariance[take]!;
  const own = fitted.seatInformation[seat]!;
  const share = fitted.seatCount[seat] === 1 ? 1 : 1 / (variance * own);
  const precision = fitted.seatPrecision[seat]!;
  const h = share * precision;
  const part = precision / fitted.chainPrecision[chain]!;
  const spread = 1 + fitted.chainPartner[chain]! * fitted.chainPrecision[chain]!;
  const left = Math.max(0, 1 - fitted.chainWeight[chain]! * fitted.leverageFactor[chain]!);
  const isOnly = part > ONLY_SEAT;
  if (share === 1 && isOnly && !(left > UNCHECKED)) return undefined;
  // Written as a sum of what repeats, other seatings and other chains tell, so that nothing cancels.
  const ofChain = (isOnly ? 0 : 1 - part) * spread + part * left;
  const information = (1 - share) / variance + (share * share * precision * ofChain) / spread;
  return { seat, chain, variance, h, spread, left, information };
}

function dofOfShift(layout: ChainLayout, scatter: LevelScatter, take: number): number {
  const place = placeOf(layout, scatter, take);
  if (place === undefined) return Number.NaN;
  const { seat, chain, h, spread, left, information } = place;
  const { seatPrecision, chainPrecision, seatVariance, chainPartner } = scatter.fitted;
  let seatPart = 0;
  for (let other = layout.seatStart[chain]!; other < layout.seatStart[chain + 1]!; other++) {
    // Sum of P's column of the take over the takes of a seating.
    const part = seatPrecision[other]! / chainPrecision[chain]!;
    const sum = other === seat ? h * (1 - part + (part * left) / spread) : -h * part * (1 - left / spread);
    seatPart += sum * sum * seatVariance[chain]!;
  }
  const chainSum = (h * left) / spread;
  const partnerPart = chainSum * chainSum * chainPartner[chain]!;
  const repeatPart = Math.max(0, information - seatPart - partnerPart);
  const { ends } = layout.groups[chain]!;
  const spent =
    spentBy(repeatPart, scatter.repeatDof) +
    spentBy(seatPart, sumDof(scatter.seating, ends[0], ends[1])) +
    spentBy(partnerPart, sumDof(scatter.partner, ends[0], ends[1]));
  return spent > 0 ? (information * information) / spent : Number.POSITIVE_INFINITY;
}

// Variance without degrees of freedom is rounding, or given by the user: it counts as known.
function spentBy(variance: number, dof: number): number {
  return variance > 0 && dof > 0 ? (variance * variance) / dof : 0;
}

/** Degrees of freedom of the sum of two shares. */
function sumDof(shares: VarianceShares | undefined, a: number, b: number): number {
  if (shares === undefined) return Number.POSITIVE_INFINITY;
  const x = shares.shares[a]!;
  const y = shares.shares[b]!;
  const spent = x ** 2 / shares.dof[a]! + y ** 2 / shares.dof[b]!;
  return spent > 0 ? (x + y) ** 2 / spent : Number.POSITIVE_INFINITY;
}
