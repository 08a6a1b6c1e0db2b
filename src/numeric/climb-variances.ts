import { choleskyInPlace, choleskyInverse } from './cholesky.ts';

/** The likelihood of some variances, K of them. */
export interface VarianceLikelihood {
  readonly logLikelihood: number;
  /** Its derivatives. */
  readonly score: Float64Array;
  /** Expected or average information, K × K, row-major. */
  readonly information: Float64Array;
}

export interface ClimbedVariances {
  readonly variances: Float64Array;
  /** Standard uncertainty of each, from the information; NaN for a variance at 0. */
  readonly standardErrors: Float64Array;
  readonly logLikelihood: number;
  readonly iterations: number;
  /** False where the steps did not settle: the variances are then only the best found. */
  readonly converged: boolean;
}

/** A step below this part of the total variance has settled. */
const SETTLED = 1e-9;
const MOST_STEPS = 200;
const MOST_HALVINGS = 6;
/** A fall of the likelihood below this part of it is rounding. */
const LIKELIHOOD_ROUNDING = 1e-11;

/**
 * Climbs to the greatest likelihood over variances that are not negative: scoring steps, with variances at 0 whose
 * derivative points below 0 held there. A step that would lower the likelihood is halved, and where that does not help
 * gives way to a step of the EM algorithm, which never lowers it.
 * Source: Searle, Casella & McCulloch, Variance Components, 1992, chapter 8; EM step: Laird & Ware 1982, Biometrics 38,
 * 963–974; average information: Gilmour, Thompson & Cullis 1995, Biometrics 51, 1440–1450 (recalled from memory).
 * @param start above 0 for every variance that is not known to be 0. @param effects number of random effects behind each
 * variance, over all responses.
 * @param residual index of the variance that cannot be 0; absent where there is none.
 */
export function climbVariances(
  start: Float64Array,
  effects: ArrayLike<number>,
  evaluate: (variances: Float64Array) => VarianceLikelihood,
  residual: number | undefined,
): ClimbedVariances {
  let variances = Float64Array.from(start);
  let here = evaluate(variances);
  let converged = false;
  let iterations = 0;
  while (!converged && iterations < MOST_STEPS) {
    iterations++;
    const step = scoringStep(variances, here);
    const total = variances.reduce((sum, value) => sum + value, 0);
    if (step?.every((part) => Math.abs(part) <= SETTLED * total)) converged = true;
    let moved = false;
    for (let halving = 0, length = 1; step !== undefined && !moved && halving < MOST_HALVINGS; halving++, length /= 2) {
      const candidate = variances.map((value, k) => landing(value, value + length * step[k]!, k === residual));
      const there = evaluate(candidate);
      if (!(there.logLikelihood >= here.logLikelihood - LIKELIHOOD_ROUNDING * Math.abs(here.logLikelihood))) continue;
      [variances, here, moved] = [candidate, there, true];
    }
    if (moved || converged) continue;
    variances = variances.map((value, k) => value + (2 * value * value * here.score[k]!) / effects[k]!);
    here = evaluate(variances);
  }
  return {
    variances,
    standardErrors: standardErrors(variances, here),
    logLikelihood: here.logLikelihood,
    iterations,
    converged,
  };
}

function landing(from: number, to: number, isResidual: boolean): number {
  return isResidual ? Math.max(to, from / 10) : Math.max(to, 0);
}

function scoringStep(variances: Float64Array, { score, information }: VarianceLikelihood): Float64Array | undefined {
  const free = [...variances.keys()].filter((k) => variances[k]! > 0 || score[k]! > 0);
  const inverse = inverseAmong(free, information, variances.length);
  if (inverse === undefined) return undefined;
  const step = new Float64Array(variances.length);
  free.forEach((k, i) => {
    free.forEach((l, j) => {
      step[k]! += inverse[i * free.length + j]! * score[l]!;
    });
  });
  return step;
}

function standardErrors(variances: Float64Array, { information }: VarianceLikelihood): Float64Array {
  const free = [...variances.keys()].filter((k) => variances[k]! > 0);
  const inverse = inverseAmong(free, information, variances.length);
  const errors = new Float64Array(variances.length).fill(Number.NaN);
  if (inverse !== undefined) {
    free.forEach((k, i) => {
      errors[k] = Math.sqrt(inverse[i * free.length + i]!);
    });
  }
  return errors;
}

function inverseAmong(members: readonly number[], matrix: Float64Array, stride: number): Float64Array | undefined {
  const n = members.length;
  const part = new Float64Array(n * n);
  members.forEach((k, i) => {
    members.forEach((l, j) => {
      part[i * n + j] = matrix[k * stride + l]!;
    });
  });
  if (!choleskyInPlace(part, n)) return undefined;
  const inverse = new Float64Array(n * n);
  choleskyInverse(part, n, inverse, new Float64Array(n * n));
  return inverse;
}
