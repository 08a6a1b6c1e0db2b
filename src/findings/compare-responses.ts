import { coverageFactors } from '../numeric/student-t.ts';
import type { SavedResult } from '../readings/saved-result.ts';

/** Difference of two responses at one frequency, in dB; NaN where one of them has no level, or no uncertainty. */
export interface Difference {
  /** Index into the frequencies. */
  readonly frequency: number;
  /** First less second. */
  readonly level: number;
  /** Standard uncertainties for both as seated, both seated again, both on other partners. */
  readonly uncertainty: number;
  readonly reseat: number;
  readonly partner: number;
  /** The smaller of the two responses' degrees of freedom. */
  readonly dof: number;
  /** k · u as seated. */
  readonly expanded: number;
  readonly status: 'ok' | 'datum' | 'open';
  readonly verdict: 'agree' | 'differ' | 'not testable';
}

/** The difference spectrum of two responses, indices into `SavedResult.responses`. */
export interface ComparedPair {
  readonly first: number;
  readonly second: number;
  readonly differences: readonly Difference[];
}

/**
 * The difference of two responses at every frequency: var(a − b) = var a + var b − 2 cov(a, b), so that what both share
 * cancels, and what sets them against each other adds. Fresh seatings and partners of two units are independent.
 * Degrees of freedom are the smaller of the two, which never makes U too small where both rest on the same scatter.
 * Source: JCGM 100:2008, 5.2.2.
 */
export function compareResponses(result: SavedResult, first: number, second: number): ComparedPair {
  const count = result.responses.length;
  const factorOf = coverageFactors(result.coverage);
  const differences = Array.from(result.frequencies, (_, f): Difference => {
    const [a, b] = [f * count + first, f * count + second];
    const level = result.levels[a]! - result.levels[b]!;
    const variance = differenceVariance(result, f, first, second);
    const uncertainty = Math.sqrt(variance);
    const fresh = (values: Float64Array) =>
      Math.sqrt(
        variance +
          Math.max(0, values[a]! ** 2 - result.uncertainty[a]! ** 2) +
          Math.max(0, values[b]! ** 2 - result.uncertainty[b]! ** 2),
      );
    const dof = Math.min(result.dof[a]!, result.dof[b]!);
    const expanded = Number.isNaN(uncertainty) || Number.isNaN(dof) ? Number.NaN : factorOf(dof) * uncertainty;
    return {
      frequency: f,
      level,
      uncertainty,
      reseat: fresh(result.reseat),
      partner: fresh(result.partner),
      dof,
      expanded,
      status: Number.isNaN(level) ? 'open' : result.isDatum[a]! || result.isDatum[b]! ? 'datum' : 'ok',
      verdict:
        Number.isNaN(level) || !(expanded > 0) ? 'not testable' : Math.abs(level) > expanded ? 'differ' : 'agree',
    };
  });
  return { first, second, differences };
}

/** Variance in dB² of the difference of two responses, never below 0. */
function differenceVariance(result: SavedResult, f: number, a: number, b: number): number {
  const sum = result.covariance(f, a, a) + result.covariance(f, b, b) - 2 * result.covariance(f, a, b);
  return Number.isNaN(sum) ? Number.NaN : Math.max(0, sum);
}
