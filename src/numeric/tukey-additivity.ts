import { fUpper } from './f-distribution.ts';

/** An additive least-squares fit with equal weights. */
export interface AdditiveFit {
  readonly fitted: ArrayLike<number>;
  readonly residuals: ArrayLike<number>;
  /** Degrees of freedom of the residuals. */
  readonly dof: number;
}

/** Tukey's test. Numbers are NaN where the fit leaves fewer than two degrees of freedom, or cannot show the slope. */
export interface AdditivityTest {
  /**
   * Residual per product of the two terms' deviations (per dB, for levels in dB): above 0 where strong readings stand
   * above the additive model at both ends, below 0 where they are compressed.
   */
  readonly slope: number;
  /** Standard uncertainty of the slope, from what is left of the residuals. */
  readonly slopeUncertainty: number;
  readonly sumOfSquares: number;
  readonly restSumOfSquares: number;
  readonly restDof: number;
  readonly f: number;
  readonly p: number;
}

/**
 * Fitted values that differ by less than this part of their size, or half squares of which the model leaves less than this
 * part, are rounding: the slope cannot be seen.
 */
const VISIBLE = 1e-9;

/**
 * Tukey's one-degree-of-freedom test of non-additivity, for any additive linear model: half the square of the fitted
 * values (about their mean) is fitted by the same model, and the residuals are held against what is left of it; for a
 * two-way table that is the product of row and column effects.
 * @param residualsOf the residuals that the same model leaves of another response.
 * Source: Tukey 1949, Biometrics 5, 232–242; for general linear models Milliken & Graybill 1970, J. Amer. Statist. Assoc.
 * 65, 797–807 (both recalled from memory). Exact for normal residuals.
 */
export function tukeyAdditivity(
  fit: AdditiveFit,
  residualsOf: (response: Float64Array) => ArrayLike<number>,
): AdditivityTest {
  const fitted = Float64Array.from(fit.fitted);
  const mean = fitted.reduce((sum, value) => sum + value, 0) / fitted.length;
  const halfSquares = fitted.map((value) => (value - mean) ** 2 / 2);
  const product = residualsOf(halfSquares);
  let [ofProduct, cross, ofResiduals] = [0, 0, 0];
  for (let r = 0; r < fitted.length; r++) {
    ofProduct += product[r]! ** 2;
    cross += product[r]! * fit.residuals[r]!;
    ofResiduals += fit.residuals[r]! ** 2;
  }
  const size = halfSquares.reduce((sum, value) => sum + value * value, 0);
  const restDof = fit.dof - 1;
  const flat = fitted.every((value) => Math.abs(value - mean) <= VISIBLE * Math.abs(mean));
  if (flat || !(ofProduct > VISIBLE ** 2 * size) || !(restDof > 0)) return NOT_TESTABLE;
  const sumOfSquares = cross ** 2 / ofProduct;
  const restSumOfSquares = Math.max(0, ofResiduals - sumOfSquares);
  const rest = restSumOfSquares / restDof;
  const f = sumOfSquares / rest;
  return {
    slope: cross / ofProduct,
    slopeUncertainty: Math.sqrt(rest / ofProduct),
    sumOfSquares,
    restSumOfSquares,
    restDof,
    f,
    p: fUpper(f, 1, restDof),
  };
}

const NOT_TESTABLE: AdditivityTest = {
  slope: Number.NaN,
  slopeUncertainty: Number.NaN,
  sumOfSquares: Number.NaN,
  restSumOfSquares: Number.NaN,
  restDof: 0,
  f: Number.NaN,
  p: Number.NaN,
};
