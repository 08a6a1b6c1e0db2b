/**
 * p values of many tests, made larger so that each may be compared with the overall risk as it stands: an adjusted value
 * at or below the risk is a rejection. Entries that are NaN (not tested) stay NaN and do not count as tests.
 */

/**
 * Holm's step-down adjustment: keeps the chance of *any* false alarm below the risk, whatever the dependence.
 * Source: S. Holm 1979, Scand. J. Statist. 6, 65–70.
 */
export function holmAdjusted(p: ArrayLike<number>): number[] {
  const adjusted = Array.from(p);
  const order = ascending(p);
  let running = 0;
  order.forEach((index, rank) => {
    running = Math.max(running, Math.min(1, (order.length - rank) * p[index]!));
    adjusted[index] = running;
  });
  return adjusted;
}

/**
 * Benjamini and Hochberg's step-up adjustment: keeps the expected *share* of false alarms among the alarms below the
 * risk, for independent or positively dependent tests.
 * Source: Y. Benjamini & Y. Hochberg 1995, J. R. Statist. Soc. B 57, 289–300.
 */
export function benjaminiHochbergAdjusted(p: ArrayLike<number>): number[] {
  const adjusted = Array.from(p);
  const order = ascending(p);
  let running = 1;
  for (let rank = order.length; rank >= 1; rank--) {
    const index = order[rank - 1]!;
    running = Math.min(running, (p[index]! * order.length) / rank);
    adjusted[index] = running;
  }
  return adjusted;
}

/** Indices of the tested entries, smallest p value first. */
function ascending(p: ArrayLike<number>): number[] {
  return Array.from(p, (_, index) => index)
    .filter((index) => !Number.isNaN(p[index]!))
    .sort((i, j) => p[i]! - p[j]!);
}
