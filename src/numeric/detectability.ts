import { normalUpperQuantile } from './normal.ts';

/**
 * Detectability factor δ0: a shift of δ0 standard uncertainties of what is tested is found with the chance `power` by a
 * two-sided normal test at the risk `risk` of a false alarm. 4.13 for 0.1 % and 80 %.
 * The chance of an alarm on the wrong side is left out: below 1e-8 of δ0 for the usual choices.
 * @param risk above 0, below 1. @param power above risk/2, below 1.
 * @throws RangeError for a probability outside 0 to 1.
 * Source: W. Baarda 1968, A testing procedure for use in geodetic networks.
 */
export function detectability(risk: number, power: number): number {
  return normalUpperQuantile(risk / 2) - normalUpperQuantile(power);
}
