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
  const { fitted, repeatVariance: repeat } = scatter;
  const seat = layout.seatOf[take]!;
  const chain = layout.chainOfSeat[seat]!;
  const count = fitted.seatCount[seat]!;
  // Weight of one take of the seating; the seating's part in the chain; what the partner variance dampens.
  const h = 1 / (repeat + count * fitted.seatVariance[chain]!);
  const part = fitted.seatPrecision[seat]! / fitted.chainPrecision[chain]!;
  const spread = 1 + fitted.chainPartner[chain]! * fitted.chainPrecision[chain]!;
  const left = Math.max(0, 1 - fitted.chainWeight[chain]! * fitted.leverageFactor[chain]!);
  if (count === 1 && part > ONLY_SEAT && !(left > UNCHECKED)) return;
  const information = informationOn(count, repeat, h, part, spread, left);
  for (let c = 0; c < columns; c++) {
    const seatMean = fitted.seatMean[seat * columns + c]!;
    const within = count === 1 ? 0 : (values[take * columns + c]! - seatMean) / repeat;
    const ofSeat =
      seatMean - fitted.chainMean[chain * columns + c]! + fitted.chainResidual[chain * columns + c]! / spread;
    into.shift[take * columns + c] = (within + h * ofSeat) / information;
  }
  into.uncertainty[take] = 1 / Math.sqrt(information);
}

/** A seating with this part of its chain is the only one; the rest is rounding. */
const ONLY_SEAT = 1 - 1e-12;

/** Pₜₜ, written as a sum of what repeats, other seatings and other chains tell, so that nothing cancels. */
function informationOn(count: number, repeat: number, h: number, part: number, spread: number, left: number): number {
  const ofChain = (part > ONLY_SEAT ? 0 : 1 - part) * spread + part * left;
  return (count - 1) / (count * repeat) + (h * ofChain) / (count * spread);
}

function dofOfShift(layout: ChainLayout, scatter: LevelScatter, take: number): number {
  const { seatPrecision, chainPrecision, seatVariance, chainPartner, chainWeight, leverageFactor, seatCount } =
    scatter.fitted;
  const seat = layout.seatOf[take]!;
  const chain = layout.chainOfSeat[seat]!;
  const count = seatCount[seat]!;
  const h = 1 / (scatter.repeatVariance + count * seatVariance[chain]!);
  const spread = 1 + chainPartner[chain]! * chainPrecision[chain]!;
  const left = Math.max(0, 1 - chainWeight[chain]! * leverageFactor[chain]!);
  const own = seatPrecision[seat]! / chainPrecision[chain]!;
  const information = informationOn(count, scatter.repeatVariance, h, own, spread, left);
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
