import { neighbourCorrelation, shareForVariance } from '../numeric/effective-share.ts';
import { repeatGroups } from '../takes/repeats.ts';
import type { TakeSet } from '../takes/take-set.ts';
import type { BandScatter } from './solution.ts';
import { thirdOctaves } from './third-octaves.ts';

/**
 * Standard deviation of a repeated reading, pooled over all repeats of a third-octave band; empty without repeats.
 * Degrees of freedom are Σ (n − 1), less what neighbouring frequencies share.
 * Source: JCGM 100:2008, 4.2.4 and H.3.6 (pooled estimate).
 */
export function repeatScatter(set: TakeSet): BandScatter[] {
  const groups = repeatGroups(set);
  if (groups.length === 0) return [];
  const width = set.frequencies.length;
  const { bands, bandOf } = thirdOctaves(set.frequencies);
  const squares = new Float64Array(bands.length);
  const dof = new Float64Array(bands.length);
  const deviations = new Float64Array(groups.flat().length * width).fill(Number.NaN);
  let row = 0;
  for (const group of groups) {
    for (let f = 0; f < width; f++) {
      const levels = group.map((take) => set.levels[take * width + f]!);
      const measured = levels.filter((level) => !Number.isNaN(level));
      if (measured.length < 2) continue;
      const mean = measured.reduce((sum, level) => sum + level, 0) / measured.length;
      levels.forEach((level, k) => {
        deviations[(row + k) * width + f] = level - mean;
      });
      const band = bandOf[f]!;
      squares[band] = squares[band]! + measured.reduce((sum, level) => sum + (level - mean) ** 2, 0);
      dof[band] = dof[band]! + measured.length - 1;
    }
    row += group.length;
  }
  const frequencies = new Float64Array(bands.length);
  for (const band of bandOf) frequencies[band] = frequencies[band]! + 1;
  const correlation = neighbourCorrelation(deviations, row, width);
  return bands.map((band, b) => ({
    from: band.from,
    to: band.to,
    standardDeviation: dof[b]! > 0 ? Math.sqrt(squares[b]! / dof[b]!) : Number.NaN,
    dof: dof[b]! * shareForVariance(correlation, frequencies[b]!),
  }));
}
