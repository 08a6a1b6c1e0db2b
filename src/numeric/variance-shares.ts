import { fUpper } from './f-distribution.ts';

/**
 * A squared deviation whose variance is the sum of the shares of two members and a part that is known:
 * square ~ (share(a) + share(b) + known) · χ²(dof) / dof.
 */
export interface SquaredContrast {
  readonly a: number;
  readonly b: number;
  readonly square: number;
  readonly dof: number;
  readonly known: number;
}

export interface VarianceShares {
  /** One a member, ≥ 0. */
  readonly shares: Float64Array;
  /** Degrees of freedom behind each share. */
  readonly dof: Float64Array;
}

/** Weight of the prior guess that a member is like the others, in degrees of freedom. Common practice, no source. */
const PRIOR_DOF = 1;
const MOST_STEPS = 40;
/** Change of a share, relative to the mean share, that counts as settled; far below what the degrees of freedom leave open. */
const SETTLED = 3e-3;

/**
 * Splits squared deviations of pairs into a non-negative share of each member, by maximum likelihood of their gamma
 * distributions. The multiplicative step share ← share · √(Σ ν square/τ² / Σ ν/τ), τ being the modelled variance, keeps
 * shares non-negative and never lowers the likelihood.
 * Each member also counts `PRIOR_DOF` degrees of freedom at the mean share of all, so that a member with few deviations
 * leans on the others.
 * @param start shares to start from; equal shares where absent.
 * Source: the likelihood is that of non-negative factorisation under the Itakura–Saito divergence, and the step with the
 * square root its majorisation–minimisation update: Févotte & Idier 2011, Neural Computation 23, 2421–2456 (recalled from
 * memory).
 */
export function varianceShares(
  contrasts: readonly SquaredContrast[],
  members: number,
  start?: Float64Array,
): VarianceShares {
  const common = commonShare(contrasts);
  const shares = start === undefined ? new Float64Array(members).fill(common) : Float64Array.from(start);
  if (!(common > 0)) return { shares: shares.fill(0), dof: degreesOfFreedom(contrasts, shares) };
  const { a, b, square, dof, known } = inColumns(contrasts);
  const pull = new Float64Array(members);
  const push = new Float64Array(members);
  for (let step = 0; step < MOST_STEPS; step++) {
    for (let i = 0; i < members; i++) {
      // A share that has sunk to 0 stays there but for the prior's pull, which this keeps finite.
      const share = Math.max(shares[i]!, 1e-12 * common);
      shares[i] = share;
      pull[i] = (PRIOR_DOF * common) / (share * share);
      push[i] = PRIOR_DOF / share;
    }
    for (let c = 0; c < a.length; c++) {
      // Not as a pair: taking an array apart costs more than the rest of the step.
      const i = a[c]!;
      const j = b[c]!;
      const precision = 1 / (shares[i]! + shares[j]! + known[c]!);
      const down = dof[c]! * precision;
      const up = down * square[c]! * precision;
      pull[i] = pull[i]! + up;
      push[i] = push[i]! + down;
      pull[j] = pull[j]! + up;
      push[j] = push[j]! + down;
    }
    let change = 0;
    for (let i = 0; i < members; i++) {
      const next = shares[i]! * Math.sqrt(pull[i]! / push[i]!);
      change = Math.max(change, Math.abs(next - shares[i]!) / common);
      shares[i] = next;
    }
    if (change < SETTLED) break;
  }
  return { shares, dof: degreesOfFreedom(contrasts, shares) };
}

function inColumns(contrasts: readonly SquaredContrast[]) {
  const count = contrasts.length;
  const columns = {
    a: new Int32Array(count),
    b: new Int32Array(count),
    square: new Float64Array(count),
    dof: new Float64Array(count),
    known: new Float64Array(count),
  };
  for (let c = 0; c < count; c++) {
    const contrast = contrasts[c]!;
    columns.a[c] = contrast.a;
    columns.b[c] = contrast.b;
    columns.square[c] = contrast.square;
    columns.dof[c] = contrast.dof;
    columns.known[c] = contrast.known;
  }
  return columns;
}

/** Chance that any deviation is left out although none is wild. Common practice, no source. */
const OUTLIER_RISK = 0.01;
const ROBUST_PASSES = 6;
/** No deviation below this many times its variance is wild at any risk used here: saves the exact test. */
const SURELY_TAME = 6;

/**
 * The same, undisturbed by some wild deviations: it starts from each member's median deviation and leaves out what
 * stands off the modelled variance by more than chance, corrected for the number of deviations. What was left out too
 * soon comes back. A member whose deviations are *mostly* large keeps them all.
 * @returns the shares, and which contrasts were used.
 */
export function robustVarianceShares(
  contrasts: readonly SquaredContrast[],
  members: number,
): VarianceShares & { readonly used: readonly SquaredContrast[] } {
  const risk = OUTLIER_RISK / contrasts.length;
  let variances = medianVariances(contrasts, members);
  let freedom = contrasts.map(() => Math.max(1, contrasts.length * MEDIAN_EFFICIENCY));
  let used: readonly SquaredContrast[] = [];
  let fit: VarianceShares = { shares: new Float64Array(members), dof: new Float64Array(members) };
  for (let pass = 0; pass < ROBUST_PASSES; pass++) {
    const next = contrasts.filter(({ square, dof }, c) => {
      const ratio = square / variances[c]!;
      return !(ratio > SURELY_TAME) || fUpper(ratio, dof, freedom[c]!) > risk;
    });
    const same = pass > 0 && next.length === used.length && next.every((contrast, c) => contrast === used[c]);
    if (same) break;
    used = next;
    fit = varianceShares(used, members, pass === 0 ? undefined : fit.shares);
    const { shares, dof } = fit;
    variances = contrasts.map(({ a, b, known }) => shares[a]! + shares[b]! + known);
    freedom = contrasts.map(({ a, b }, c) => freedomOf(variances[c]!, shares[a]!, dof[a]!, shares[b]!, dof[b]!));
  }
  return { ...fit, used };
}

/** Welch–Satterthwaite degrees of freedom of share a + share b + known. */
function freedomOf(variance: number, a: number, dofA: number, b: number, dofB: number): number {
  const spent = (a * a) / dofA + (b * b) / dofB;
  return spent > 0 ? (variance * variance) / spent : Number.POSITIVE_INFINITY;
}

/** Part of its degrees of freedom that a variance from a median keeps. Recalled from memory: the efficiency of the median deviation is 37 %. */
const MEDIAN_EFFICIENCY = 0.37;

/** Median of χ²(1): turns a median of squares into a variance. Source: any table of χ²; 0.454936. */
const MEDIAN_SQUARE = 0.454936;

// Half-way between a member's own median and that of all: a median of few is rough.
function medianVariances(contrasts: readonly SquaredContrast[], members: number): number[] {
  const own: number[][] = Array.from({ length: members }, () => []);
  for (const { a, b, square } of contrasts) {
    own[a]!.push(square);
    own[b]!.push(square);
  }
  const overall = median(contrasts.map(({ square }) => square));
  const level = own.map((squares) => (squares.length === 0 ? overall : (median(squares) + overall) / 2));
  return contrasts.map(({ a, b, known }) => Math.max(known, (level[a]! + level[b]!) / 2 / MEDIAN_SQUARE));
}

function median(values: readonly number[]): number {
  const sorted = Float64Array.from(values).sort();
  const middle = sorted.length >> 1;
  if (sorted.length === 0) return 0;
  return sorted.length % 2 === 1 ? sorted[middle]! : (sorted[middle - 1]! + sorted[middle]!) / 2;
}

/** The share that all members would have, were they alike. */
function commonShare(contrasts: readonly SquaredContrast[]): number {
  let excess = 0;
  let total = 0;
  for (const { square, dof, known } of contrasts) {
    excess += dof * (square - known);
    total += dof;
  }
  return total > 0 ? Math.max(0, excess / total / 2) : 0;
}

// What a deviation tells of a share: its degrees of freedom times the squared part that the share has in its variance.
function degreesOfFreedom(contrasts: readonly SquaredContrast[], shares: Float64Array): Float64Array {
  const dof = new Float64Array(shares.length).fill(PRIOR_DOF);
  for (const { a, b, dof: own, known } of contrasts) {
    const variance = shares[a]! + shares[b]! + known;
    if (!(variance > 0)) continue;
    if (a === b) dof[a] = dof[a]! + own * ((2 * shares[a]!) / variance) ** 2;
    else {
      dof[a] = dof[a]! + own * (shares[a]! / variance) ** 2;
      dof[b] = dof[b]! + own * (shares[b]! / variance) ** 2;
    }
  }
  return dof;
}
