import { neighbourCorrelation, shareForVariance } from '../numeric/effective-share.ts';
import { repeatGroups } from '../takes/repeats.ts';
import type { TakeSet } from '../takes/take-set.ts';

/**
 * Correlation of the errors of readings at neighbouring frequencies: as repeats show it, else as residuals do, where it
 * holds seatings and partners too, whose smooth errors make it larger. The median over the takes, so that a take with a
 * moved gain does not count for all. 0 where nothing can be told.
 */
export function errorCorrelation(set: TakeSet, residuals: Float64Array): number {
  const width = set.frequencies.length;
  const repeats = repeatGroups(set).flatMap((group) => deviationsOf(group, set));
  const series = repeats.length > 0 ? repeats : set.takes.map((_, t) => residuals.subarray(t * width, (t + 1) * width));
  const found = series.filter(hasNeighbours).map((own) => neighbourCorrelation(own, 1, width));
  if (found.length === 0) return 0;
  return found.sort((a, b) => a - b)[found.length >> 1]!;
}

/**
 * How many independent frequencies a mean over `count` neighbours is worth: from 1 to `count`. For a mean the correlation
 * itself takes the place that its square has for a mean square. Source: as at `shareForVariance`.
 */
export function independentInMean(correlation: number, count: number): number {
  return count * shareForVariance(Math.sqrt(correlation), count);
}

function deviationsOf(group: readonly number[], set: TakeSet): Float64Array[] {
  const width = set.frequencies.length;
  const rows = group.map((t) => set.levels.subarray(t * width, (t + 1) * width));
  const mean = new Float64Array(width);
  for (const row of rows) for (let f = 0; f < width; f++) mean[f] = mean[f]! + row[f]! / rows.length;
  return rows.map((row) => row.map((level, f) => level - mean[f]!));
}

function hasNeighbours(series: Float64Array): boolean {
  return series.some((value, k) => k > 0 && value !== 0 && !Number.isNaN(value) && !Number.isNaN(series[k - 1]!));
}
