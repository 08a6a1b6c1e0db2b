import type { MonteCarlo } from '../estimate/monte-carlo.ts';
import { jsonFigure } from './json-text.ts';
import { roundedFrequency } from './number-text.ts';
import { responseName } from './response-name.ts';
import type { Result } from './result.ts';
import { bandText, counted, listText } from './wording.ts';

/** `monte_carlo` in summary.json; `null` where no check was asked for. */
export function monteCarloRecord({ model, monteCarlo }: Pick<Result, 'model' | 'monteCarlo'>): unknown {
  if (monteCarlo === undefined) return null;
  const { draws, seed, bands, tooClose } = monteCarlo;
  return {
    draws,
    seed,
    too_close_to_noise: jsonFigure(tooClose),
    bands: bands.map(({ from, to, verdict, digits, distance, tolerance, samplingError, response }) => ({
      from_hz: roundedFrequency(from),
      to_hz: roundedFrequency(to),
      verdict,
      digits,
      distance_db: jsonFigure(distance),
      tolerance_db: jsonFigure(tolerance),
      sampling_error_db: jsonFigure(samplingError),
      worst: responseName(model.responses[response]!),
    })),
  };
}

/** What the check found, in a sentence or two; empty where none was asked for. */
export function monteCarloSentence(monteCarlo: MonteCarlo | undefined): string {
  if (monteCarlo === undefined) return '';
  const { draws, bands } = monteCarlo;
  const having = (verdict: string) => bands.filter((band) => band.verdict === verdict);
  const [bad, open, good] = [having('not validated'), having('undecided'), having('validated')];
  const digits = Math.min(...good.map((band) => band.digits));
  const parts = [
    ...(good.length > 0
      ? [`validated in ${good.length} of ${counted(bands.length, 'band')}, to ${counted(digits, 'digit')} of u`]
      : []),
    ...(bad.length > 0 ? [`not validated in ${listText(bad.map(bandText), 6)}`] : []),
    ...(open.length > 0 ? [`undecided in ${listText(open.map(bandText), 6)}, for want of draws`] : []),
  ];
  if (parts.length === 0) return '';
  return `Monte Carlo check with ${draws} draws (JCGM 101:2008, clause 8): the intervals are ${parts.join('; ')}.`;
}
