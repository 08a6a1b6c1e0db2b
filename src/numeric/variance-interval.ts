import { chiSquareQuantile, chiSquareUpperQuantile } from './chi-square.ts';
import { fQuantile, fUpperQuantile } from './f-distribution.ts';

/** A mean square with its degrees of freedom (above 0, fractions allowed). */
export interface MeanSquare {
  readonly value: number;
  readonly dof: number;
}

export interface VarianceInterval {
  readonly low: number;
  readonly high: number;
}

/**
 * Two-sided interval of a variance estimated by a mean square, by chi-square.
 * @param coverage e.g. 0.95.
 * Source: Searle, Casella & McCulloch, Variance Components, 1992, section 3.6 (section number recalled from memory).
 */
export function varianceInterval({ value, dof }: MeanSquare, coverage: number): VarianceInterval {
  const tail = (1 - coverage) / 2;
  return {
    low: (value * dof) / chiSquareUpperQuantile(tail, dof),
    high: (value * dof) / chiSquareQuantile(tail, dof),
  };
}

/**
 * Two-sided interval of the difference above − below of two expected mean squares (independent estimates), both ends not
 * below 0. The lower end leaves 0 exactly where the F test of above against below is significant at half the risk; an
 * estimate of 0 still has an upper end.
 * Source: the modified large-sample interval of Ting, Burdick, Graybill, Jeyaratnam & Lu 1990, J. Statist. Comput. Simul.
 * 35, 135–143 (formulas recalled from memory; coverage held by simulation in the tests).
 */
export function differenceInterval(above: MeanSquare, below: MeanSquare, coverage: number): VarianceInterval {
  const tail = (1 - coverage) / 2;
  const difference = above.value - below.value;
  const squares = [above.value ** 2, below.value ** 2, above.value * below.value] as const;
  const bound = (own: number, other: number, ratio: number) =>
    own ** 2 * squares[0] +
    other ** 2 * squares[1] +
    (((ratio - 1) ** 2 - (own * ratio) ** 2 - other ** 2) / ratio) * squares[2];

  const lowerVariance = bound(
    1 - above.dof / chiSquareUpperQuantile(tail, above.dof),
    below.dof / chiSquareQuantile(tail, below.dof) - 1,
    fUpperQuantile(tail, above.dof, below.dof),
  );
  const upperVariance = bound(
    above.dof / chiSquareQuantile(tail, above.dof) - 1,
    1 - below.dof / chiSquareUpperQuantile(tail, below.dof),
    fQuantile(tail, above.dof, below.dof),
  );
  return {
    low: Math.max(0, difference - Math.sqrt(Math.max(0, lowerVariance))),
    high: Math.max(0, difference + Math.sqrt(Math.max(0, upperVariance))),
  };
}
