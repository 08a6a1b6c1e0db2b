import { csvLines } from './csv-file.ts';
import { figureCell, frequencyCell, levelCell, rememberingLast } from './number-text.ts';
import type { OutputFile, Result } from './result.ts';

const COLUMNS = [
  'take',
  'emitter',
  'receiver',
  'frequency_hz',
  'level_db',
  'fitted_db',
  'residual_db',
  'u_db',
  'standardised',
  'redundancy',
];

/** Decimal places of the standardised residual, a plain number of the order of 1. */
const STANDARDISED_PLACES = 4;
const ROWS_A_CHUNK = 2000;

/**
 * `residuals.csv`: every reading, take by take. A reading that could not be fitted, since the level of its path is not
 * known at its frequency, has its level only. The standardised residual is absent where
 * there is no uncertainty or nothing checks the reading. A take that was left out has no redundancy, and w = residual / u.
 * The labels of a take are quoted once; the numbers need no quotes and are put together here, since millions of rows
 * take the writer several times as long.
 */
export function residualsTable(result: Result): OutputFile {
  return { name: 'residuals.csv', chunks: () => residualChunks(result) };
}

function* residualChunks({ set, solution }: Result): Iterable<string> {
  yield csvLines([COLUMNS]);
  const width = set.frequencies.length;
  const frequencies = Array.from(set.frequencies, frequencyCell);
  const { residuals, redundancy, readingUncertainty } = solution;
  const independent = readingUncertainty.independent ?? readingUncertainty.values;
  const uncertaintyText = rememberingLast(figureCell);
  const redundancyText = rememberingLast(figureCell);
  let rows = 0;
  let text = '';
  for (const [t, take] of set.takes.entries()) {
    const labels = csvLines([[take.id, take.emitter, take.receiver]]).slice(0, -1);
    for (let f = 0; f < width; f++) {
      const cell = t * width + f;
      const level = set.levels[cell]!;
      if (Number.isNaN(level)) continue;
      const residual = residuals[cell]!;
      const u = readingUncertainty.values[cell]!;
      const share = redundancy[cell]!;
      // A reading that had no part in the fit deviates from it by its own u (and by that of the fit, not counted here).
      const part = Number.isNaN(share) ? 1 : share;
      // The fitted value has the variance (1 − redundancy) · (u of an independent reading of the same weight)².
      const fitted = (1 - part) * (independent[cell]! * independent[cell]!);
      const standardised = part > 0 && u > 0 ? residual / Math.sqrt(u * u - fitted) : Number.NaN;
      text += `${labels},${frequencies[f]!},${levelCell(level)},${levelCell(level - residual)},${levelCell(residual)},${uncertaintyText(u)},${levelCell(standardised, STANDARDISED_PLACES)},${redundancyText(share)}\n`;
      rows++;
      if (rows % ROWS_A_CHUNK > 0) continue;
      yield text;
      text = '';
    }
  }
  if (text !== '') yield text;
}
