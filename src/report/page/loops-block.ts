import { worstLoops } from '../figures/loops-figure.ts';
import { escaped } from '../figures/markup.ts';
import { figureText, roundedCell } from '../figures/numbers.ts';
import type { Result } from '../result.ts';
import { bandText } from '../wording.ts';
import { paragraph, table } from './blocks.ts';

/** Loops told with their chains; the rest are in loops.csv. */
const MOST = 10;

/** The loops that close worst, with what is to be added and subtracted. */
export function loopsTableBlock(result: Result): string {
  const { loops } = result.examination.loops;
  if (loops.length === 0) return paragraph('The pairs form no even closed walk: nothing can be checked by hand.');
  const worst = worstLoops(result, MOST);
  if (worst.length === 0) {
    return paragraph(`${loops.length} loops are in loops.csv; without an uncertainty they have no limit.`);
  }
  const rows = worst.map(({ name, chain, band, expanded }) => [
    escaped(name),
    `<code>${escaped(chain)}</code>`,
    escaped(bandText(band)),
    roundedCell(band.closure, expanded).replace('-', '\u2212'),
    figureText(expanded),
    Math.abs(band.closure) > expanded ? '<b>no</b>' : 'yes',
  ]);
  return table(
    `The loops that close worst, of ${loops.length}. Add and subtract the mean levels of the pairs, from the takes in your files: the sum is the closure.`,
    [
      { name: 'Loop' },
      { name: 'Sum' },
      { name: 'Worst band' },
      { name: 'Closure, dB', isNumber: true },
      { name: 'U, dB', isNumber: true },
      { name: 'Within ±U' },
    ],
    rows,
  );
}
