import { choleskyInPlace, choleskyInverse } from '../numeric/cholesky.ts';

/** A deviation along frequency with the noise it stands in. */
export interface WhitenedCurve {
  /** Indices of the frequencies at which it is known, ascending. */
  readonly used: readonly number[];
  /** Entry a frequency, in dB. */
  readonly shift: Float64Array;
  /** Standard uncertainty in dB. */
  readonly uncertainty: Float64Array;
  /** Correlation of neighbours, 0 to below 1. */
  readonly correlation: number;
}

export interface ShapeFit {
  /** Σ of squared innovations: as many as frequencies where nothing but the noise is left. */
  readonly misfit: number;
  readonly coefficients: readonly number[];
  /** Standard uncertainties of the coefficients; larger where more noise is left than there should be. */
  readonly uncertainties: readonly number[];
}

/**
 * Fits shapes (a curve over all frequencies each) to a deviation by least squares, both standardised and freed of
 * first-order autocorrelation. Source: Cochrane & Orcutt 1949, J. Am. Statist. Assoc. 44, 32–61, with the first value kept
 * (Prais & Winsten).
 */
export function fitShape(curve: WhitenedCurve, shapes: readonly Float64Array[]): ShapeFit {
  const y = whiten(curve, curve.shift);
  const columns = shapes.map((shape) => whiten(curve, shape));
  const n = columns.length;
  const normal = new Float64Array(n * n);
  const side = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) normal[i * n + j] = dot(columns[i]!, columns[j]!);
    side[i] = dot(columns[i]!, y);
  }
  const inverse = new Float64Array(n * n);
  if (n > 0) {
    if (!choleskyInPlace(normal, n)) throw new Error('shapes along frequency that are not independent');
    choleskyInverse(normal, n, inverse, new Float64Array(n * n));
  }
  const coefficients = Array.from({ length: n }, (_, i) =>
    side.reduce((sum, entry, j) => sum + inverse[i * n + j]! * entry, 0),
  );
  const misfit = y.reduce((sum, value, k) => {
    const rest = coefficients.reduce((left, coefficient, i) => left - coefficient * columns[i]![k]!, value);
    return sum + rest * rest;
  }, 0);
  const excess = Math.max(1, misfit / Math.max(1, y.length - n));
  const uncertainties = coefficients.map((_, i) => Math.sqrt(inverse[i * n + i]! * excess));
  return { misfit, coefficients, uncertainties };
}

/** Innovations of a curve in units of the noise. */
export function whiten({ used, uncertainty, correlation }: WhitenedCurve, values: Float64Array): Float64Array {
  const scale = Math.sqrt(1 - correlation * correlation);
  let before = 0;
  return Float64Array.from(used, (f, k) => {
    const standardised = values[f]! / uncertainty[f]!;
    const innovation = k === 0 ? standardised : (standardised - correlation * before) / scale;
    before = standardised;
    return innovation;
  });
}

export function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += a[i]! * b[i]!;
  return sum;
}
