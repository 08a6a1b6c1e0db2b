import { digamma, trigamma } from '../numeric/polygamma.ts';

/** Decibels of a power per neper of it. */
const POWER_DB = 10 / Math.LN10;
/** Decibels of an amplitude per neper of it. */
const AMPLITUDE_DB = 20 / Math.LN10;

/** What averaging a spectrum a limited number of times leaves, in dB. */
export interface SpectralError {
  /** Standard uncertainty of the level. */
  readonly uncertainty: number;
  /** What the level lies above the true one on the average; below 0, as the logarithm bends down. */
  readonly bias: number;
}

/**
 * A level that is the logarithm of the mean of n independent power spectra: n times the mean is a gamma variable of shape
 * n, so that its logarithm has the mean ψ(n) − ln n and the variance ψ′(n), exactly.
 * Source: J. S. Bendat & A. G. Piersol, Random Data (relative random error 1/√n, to first order); mean and variance of a
 * logarithmic gamma variable by the derivatives of ln Γ, NIST Digital Library of Mathematical Functions, 5.2 and 5.15.
 * @param averages 1 or more; the effective number where records overlap.
 */
export function powerSpectrumError(averages: number): SpectralError {
  return {
    uncertainty: POWER_DB * Math.sqrt(trigamma(averages)),
    bias: POWER_DB * (digamma(averages) - Math.log(averages)),
  };
}

/**
 * The level of a transfer-function magnitude, to first order in its random error √((1 − γ²) / (2 n γ²)).
 * Source: J. S. Bendat & A. G. Piersol, Random Data. Its bias is of higher order, and none is taken off.
 * @param coherence ordinary coherence γ², above 0. At 1 the error is 0: then it says nothing but that it is below the
 * digits written.
 */
export function transferFunctionError(coherence: number, averages: number): SpectralError {
  return { uncertainty: AMPLITUDE_DB * Math.sqrt((1 - coherence) / (2 * coherence * averages)), bias: 0 };
}
