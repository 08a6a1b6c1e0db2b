import type { ResponseBudget } from './budget.ts';

/** A source over all bands of a response. */
export interface BudgetTotal {
  readonly source: string;
  readonly type: 'A' | 'B';
  /** Decibels: root mean square over the bands. */
  readonly uncertainty: number;
  /** Part of the variance of all bands together. */
  readonly share: number;
  /** Root mean square over the bands; NaN where it is no single figure. */
  readonly sensitivity: number;
}

/** The sources of some budgets taken together, every band counting the same; largest first. */
export function budgetTotals(bands: readonly ResponseBudget[]): BudgetTotal[] {
  const whole = bands.reduce((sum, { uncertainty }) => sum + uncertainty ** 2, 0);
  const sums = new Map<string, { type: 'A' | 'B'; variance: number; squares: number; count: number }>();
  for (const { parts } of bands) {
    for (const { source, type, uncertainty, sensitivity } of parts) {
      const sum = sums.get(source) ?? { type, variance: 0, squares: 0, count: 0 };
      sums.set(source, sum);
      sum.variance += uncertainty ** 2;
      sum.squares += sensitivity ** 2;
      sum.count++;
    }
  }
  return [...sums]
    .map(([source, { type, variance, squares, count }]) => ({
      source,
      type,
      uncertainty: Math.sqrt(variance / bands.length),
      share: variance / whole,
      sensitivity: Math.sqrt(squares / count),
    }))
    .sort((a, b) => b.share - a.share);
}
