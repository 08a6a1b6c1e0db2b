/**
 * How many independent values the F values of a series are worth in a *mean square*: (Σ c(f,f))² / Σ c(f,g)², where c is
 * the covariance of values f and g. It is estimated from d independent series (of mean 0) in two ways, and the smaller
 * answer is given:
 * - without any assumption, from all products, the bias of Σ c² taken out (needs two series);
 * - for a covariance that depends on the distance only, summed up to the first distance at which it is not above 0.
 * The first sees a variance that changes along the series and correlation that comes back at a distance; the second is
 * steady with few series. Always from 1 to F. 1 where there is no scatter at all.
 * Source: Box 1954, Ann. Math. Statist. 25, 484–498 (effective degrees of freedom); Srivastava 2005, J. Japan Statist.
 * Soc. 35, 251–272 (unbiased Σ c²); Geyer 1992, Statist. Sci. 7, 473–483 (initial positive sequence, there for a mean).
 * All three recalled from memory. The false-alarm rate that comes of it is held by simulation in the tests.
 * @param products F × F, row-major, symmetric: inner products of the series' values at f and g, over the series.
 * @param series number of independent series at each of the F values, above 0 (they may differ where values are missing).
 */
export function effectiveCount(products: Float64Array, series: ArrayLike<number>): number {
  const count = series.length;
  const covariance = new Float64Array(count * count);
  let trace = 0;
  let squares = 0;
  let meanSeries = 0;
  for (let f = 0; f < count; f++) {
    meanSeries += series[f]!;
    for (let g = 0; g < count; g++) {
      const entry = products[f * count + g]! / Math.min(series[f]!, series[g]!);
      covariance[f * count + g] = entry;
      squares += entry * entry;
      if (f === g) trace += entry;
    }
  }
  if (!(trace > 0)) return 1;
  const byDistance = trace ** 2 / squaresByDistance(covariance, count);
  return Math.max(1, Math.min(count, byDistance, withoutAssumption(trace, squares, meanSeries / count, count)));
}

// From a single series the bias cannot be told from Σ c² itself.
const FEWEST_SERIES = 2;

function withoutAssumption(trace: number, squares: number, series: number, count: number): number {
  if (!(series >= FEWEST_SERIES)) return count;
  const unbiased = (series ** 2 / ((series - 1) * (series + 2))) * (squares - trace ** 2 / series);
  return trace ** 2 / Math.max(unbiased, trace ** 2 / count);
}

function squaresByDistance(covariance: Float64Array, count: number): number {
  let sum = 0;
  for (let distance = 0; distance < count; distance++) {
    let total = 0;
    for (let f = 0; f + distance < count; f++) total += covariance[f * count + f + distance]!;
    if (total <= 0) break;
    sum += ((distance === 0 ? 1 : 2) * total ** 2) / (count - distance);
  }
  return sum;
}
