/**
 * Correlation between neighbours, pooled over several series of mean 0: Σ v(k) v(k+1) / Σ v². NaN entries break a series.
 * 0 where there are too few values to tell, and never below 0: anticorrelated neighbours earn no extra degrees of freedom.
 * @param series row-major, `rows` × `columns`.
 */
export function neighbourCorrelation(series: Float64Array, rows: number, columns: number): number {
  let products = 0;
  let squares = 0;
  for (let r = 0; r < rows; r++) {
    for (let c = 0; c + 1 < columns; c++) {
      const [here, next] = [series[r * columns + c]!, series[r * columns + c + 1]!];
      if (Number.isNaN(here) || Number.isNaN(next)) continue;
      products += here * next;
      squares += (here * here + next * next) / 2;
    }
  }
  return squares > 0 ? Math.max(0, Math.min(products / squares, LARGEST_CORRELATION)) : 0;
}

// A share of exactly 0 would take away all degrees of freedom; a thousandth is as good as none in any series met here.
const LARGEST_CORRELATION = 0.999;

/**
 * Share of the values of a series that count as independent in a *mean*, for a first-order autoregressive series with
 * neighbour correlation `rho`. Source: Bayley & Hammersley 1946, Suppl. J. R. Statist. Soc. 8, 184–197 (large series;
 * formula recalled from memory).
 */
export function shareForMean(rho: number): number {
  return (1 - rho) / (1 + rho);
}

/**
 * The same for a *variance* (mean square) of `count` values: 1 / (1 + 2 Σ (1 − k/n) ρ²ᵏ), k from 1 to n − 1, which is
 * (1 − ρ²) / (1 + ρ²) for a long series and 1/n where all values say the same: n values are never worth less than one.
 * Same source.
 */
export function shareForVariance(rho: number, count = Number.POSITIVE_INFINITY): number {
  const q = rho * rho;
  if (count === Number.POSITIVE_INFINITY) return (1 - q) / (1 + q);
  const sum = q / (1 - q) - (q * (1 - q ** count)) / (count * (1 - q) ** 2);
  return 1 / (1 + 2 * sum);
}
