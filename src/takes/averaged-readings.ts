import type { Readings } from '../readings/readings.ts';
import { powerSpectrumError, transferFunctionError } from './spectral-error.ts';

/** Whose word the uncertainties of readings are. */
export type UncertaintyOrigin = 'column' | 'averages' | 'both';

/** Readings with an uncertainty wherever the input tells one. */
export interface AveragedReadings {
  readonly readings: Readings;
  /** Absent where no reading has an uncertainty. */
  readonly origin: UncertaintyOrigin | undefined;
  readonly notices: readonly string[];
}

/**
 * Gives readings without a `u_db` the uncertainty that follows from `averages`, with `coherence` where that is given too.
 * Levels of averaged power spectra are freed of their small-sample bias; a level with a `u_db` stays as it is, since that
 * figure speaks of the level as written.
 */
export function averagedReadings(readings: Readings): AveragedReadings {
  const { averages, coherence, uncertainty } = readings;
  const given = uncertainty?.some((u) => !Number.isNaN(u)) === true;
  const counts = { power: 0, transfer: 0, ownFigure: 0, perfect: 0, alone: 0, largestBias: 0 };
  const level = Float64Array.from(readings.level);
  const found = Float64Array.from({ length: readings.count }, (_, i) => uncertainty?.[i] ?? Number.NaN);
  for (let i = 0; i < readings.count; i++) {
    const [n, squared] = [averages?.[i] ?? Number.NaN, coherence?.[i] ?? Number.NaN];
    if (Number.isNaN(n)) {
      if (!Number.isNaN(squared)) counts.alone++;
    } else if (!Number.isNaN(found[i]!)) counts.ownFigure++;
    else if (squared === 1) counts.perfect++;
    else {
      const error = Number.isNaN(squared) ? powerSpectrumError(n) : transferFunctionError(squared, n);
      counts[Number.isNaN(squared) ? 'power' : 'transfer']++;
      found[i] = error.uncertainty;
      level[i] = level[i]! - error.bias;
      counts.largestBias = Math.max(counts.largestBias, -error.bias);
    }
  }
  const made = counts.power + counts.transfer;
  return {
    readings: { ...readings, level, uncertainty: given || made > 0 ? found : undefined },
    origin: made === 0 ? (given ? 'column' : undefined) : given ? 'both' : 'averages',
    notices: noticesOf(counts, readings.count),
  };
}

function noticesOf(
  counts: Readonly<Record<'power' | 'transfer' | 'ownFigure' | 'perfect' | 'alone' | 'largestBias', number>>,
  count: number,
): string[] {
  const notices: string[] = [];
  if (counts.power > 0) {
    notices.push(
      `averages gives ${counts.power} of ${count} readings their uncertainty, as levels of averaged power spectra; their bias, at most ${counts.largestBias.toPrecision(2)} dB, is taken off.`,
    );
  }
  if (counts.transfer > 0) {
    notices.push(
      `averages and coherence give ${counts.transfer} of ${count} readings their uncertainty, as levels of transfer functions.`,
    );
  }
  if (counts.ownFigure > 0) {
    notices.push(`averages is given for ${counts.ownFigure} of ${count} readings that have a u_db: u_db counts.`);
  }
  if (counts.perfect > 0) {
    notices.push(
      `coherence is 1 for ${counts.perfect} of ${count} readings: their random error is below the digits written, and no uncertainty is made of it.`,
    );
  }
  if (counts.alone > 0) {
    notices.push(
      `coherence is given for ${counts.alone} of ${count} readings without averages: no uncertainty is made of it.`,
    );
  }
  return notices;
}
