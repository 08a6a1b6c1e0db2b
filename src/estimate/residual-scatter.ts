import { neighbourCorrelation, shareForVariance } from '../numeric/effective-share.ts';
import type { TakeSet } from '../takes/take-set.ts';
import type { BandScatter, ReadingUncertainty } from './solution.ts';
import type { Sweep } from './sweep.ts';
import { thirdOctaves } from './third-octaves.ts';

/** Below this many decibels residuals are rounding, and nothing can be learnt from them. */
const ROUNDING = 1e-9;

/**
 * The uncertainty of a reading from what the fit leaves: √(Σ residual² / Σ redundancy) per third-octave band.
 * Degrees of freedom are Σ redundancy, less what neighbouring frequencies share. NaN in bands without any.
 * Source: JCGM 100:2008, H.3.3 (standard deviation of a fit).
 */
export function residualScatter(set: TakeSet, swept: Sweep): ReadingUncertainty {
  const width = set.frequencies.length;
  const { bands, bandOf } = thirdOctaves(set.frequencies);
  const squares = new Float64Array(bands.length);
  const freedom = new Float64Array(bands.length);
  for (let cell = 0; cell < set.levels.length; cell++) {
    const residual = swept.residuals[cell]!;
    if (Number.isNaN(residual)) continue;
    const band = bandOf[cell % width]!;
    squares[band] = squares[band]! + residual * residual;
    freedom[band] = freedom[band]! + swept.redundancy[cell]!;
  }
  const frequencies = new Float64Array(bands.length);
  for (const band of bandOf) frequencies[band] = frequencies[band]! + 1;
  const correlation = neighbourCorrelation(swept.residuals, set.takes.length, width);
  const scatter = bands.map((band, b): BandScatter => {
    const deviation = Math.sqrt(squares[b]! / freedom[b]!);
    const known = freedom[b]! > 0 && deviation > ROUNDING;
    return {
      from: band.from,
      to: band.to,
      standardDeviation: known ? deviation : Number.NaN,
      dof: known ? freedom[b]! * shareForVariance(correlation, frequencies[b]!) : 0,
    };
  });
  const found = scatter.some((band) => band.dof > 0);
  return {
    source: found ? 'residuals' : 'none',
    statement: found
      ? 'The input gives no uncertainty and no repeats: that of a reading is what the fit leaves unexplained, pooled per third-octave band.'
      : 'The input gives no uncertainty, no repeats and no spare readings: there is no uncertainty to report.',
    values: set.levels.map((level, cell) =>
      Number.isNaN(level) ? Number.NaN : scatter[bandOf[cell % width]!]!.standardDeviation,
    ),
    dof: Float64Array.from(bandOf, (band) => scatter[band]!.dof),
    bands: found ? scatter : [],
  };
}
