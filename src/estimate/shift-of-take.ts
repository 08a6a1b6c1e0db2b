import type { Chain, LevelScatter, Seat } from './scatter-of-level.ts';
import { UNCHECKED } from './scatter-of-level.ts';

/** What a take shows beyond what everything else says of it, with repeat, seating and partner scatter taken into account. */
export interface Shift {
  /** Decibels, one a column. */
  readonly shift: Float64Array;
  /** Standard uncertainty in dB of each of them; NaN where nothing checks the take. */
  readonly uncertainty: number;
  /** Effective degrees of freedom of that uncertainty. */
  readonly dof: number;
}

/**
 * Shift of take t by generalised least squares: with P = V⁻¹ − V⁻¹X(XᵀV⁻¹X)⁻¹XᵀV⁻¹ it is (P y)ₜ / Pₜₜ with variance
 * 1/Pₜₜ. V is made of repeat variance σ², seating variance s² shared by the takes of a seating, and partner variance q²
 * shared by those of a chain, so that P follows from seating and chain means in closed form.
 * Degrees of freedom by Welch–Satterthwaite over the parts that repeat, seating and partner have in the variance.
 * Source: mean-shift outlier model, Cook & Weisberg, Residuals and Influence in Regression, 1982, section 2.2.2, in its
 * generalised least-squares form; JCGM 100:2008, G.4.1.
 */
export function shiftOfTake(scatter: LevelScatter, chain: Chain, seat: Seat, take: number): Shift {
  const { columns, values } = scatter.deviations;
  const count = seat.takes.length;
  const repeat = scatter.repeatVariance;
  const seatVariance = seatingVariance(scatter, chain);
  // Weight of one take of the seating, seen alone; of the seating in the chain; what the partner variance dampens.
  const h = 1 / (repeat + count * seatVariance);
  const part = seat.precision / chain.precision;
  const spread = 1 + chain.partner * chain.precision;
  const left = Math.max(0, 1 - chain.weight * chain.leverageFactor);
  // Written as a sum of what repeats, other seatings and other chains tell, so that nothing cancels.
  const ofChain = (1 - part) * spread + part * left;
  const information = (count - 1) / (count * repeat) + (h * ofChain) / (count * spread);
  const shift = new Float64Array(columns).fill(Number.NaN);
  const isChecked = count > 1 || chain.seats.length > 1 || left > UNCHECKED;
  if (!isChecked) return { shift, uncertainty: Number.NaN, dof: Number.NaN };
  for (let c = 0; c < columns; c++) {
    const within = (values[take * columns + c]! - seat.mean[c]!) / repeat;
    const ofSeat = seat.mean[c]! - chain.mean[c]! + chain.residual[c]! / spread;
    shift[c] = (within + h * ofSeat) / information;
  }
  const dof = dofOfShift(scatter, chain, seat, { h, information, seatVariance, spread, left });
  return { shift, uncertainty: 1 / Math.sqrt(information), dof };
}

function seatingVariance({ seating }: LevelScatter, chain: Chain): number {
  const [a, b] = chain.group.ends;
  return seating === undefined ? 0 : seating.shares[a]! + seating.shares[b]!;
}

interface Parts {
  readonly h: number;
  readonly information: number;
  readonly seatVariance: number;
  readonly spread: number;
  readonly left: number;
}

function dofOfShift(scatter: LevelScatter, chain: Chain, seat: Seat, parts: Parts): number {
  const { h, information, seatVariance, spread, left } = parts;
  let seatPart = 0;
  for (const other of chain.seats) {
    // Sum of P's column of the take over the takes of a seating.
    const part = other.precision / chain.precision;
    const sum = other === seat ? h * (1 - part + (part * left) / spread) : -h * part * (1 - left / spread);
    seatPart += sum * sum * seatVariance;
  }
  const chainSum = (h * left) / spread;
  const partnerPart = chainSum * chainSum * chain.partner;
  const repeatPart = Math.max(0, information - seatPart - partnerPart);
  const [a, b] = chain.group.ends;
  const spent =
    part(repeatPart, scatter.repeatDof) +
    part(seatPart, sumDof(scatter.seating, a, b)) +
    part(partnerPart, sumDof(scatter.partner, a, b));
  return spent > 0 ? (information * information) / spent : Number.POSITIVE_INFINITY;
}

// Variance without degrees of freedom is rounding, or given by the user: it counts as known.
function part(variance: number, dof: number): number {
  return variance > 0 && dof > 0 ? (variance * variance) / dof : 0;
}

/** Degrees of freedom of the sum of two shares. */
function sumDof(shares: LevelScatter['seating'], a: number, b: number): number {
  if (shares === undefined) return Number.POSITIVE_INFINITY;
  const [x, y] = [shares.shares[a]!, shares.shares[b]!];
  const spent = x ** 2 / shares.dof[a]! + y ** 2 / shares.dof[b]!;
  return spent > 0 ? (x + y) ** 2 / spent : Number.POSITIVE_INFINITY;
}
