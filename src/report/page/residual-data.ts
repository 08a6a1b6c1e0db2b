import { figureText } from '../figures/numbers.ts';
import { residualCells } from '../figures/residual-cells.ts';
import { rememberingLast } from '../number-text.ts';
import type { Result } from '../result.ts';

/**
 * What the map's readout needs beside its table: the standard uncertainty of each cell's reading, and its take and frequency
 * where cells hold several. A value that is the same as its left neighbour's is left empty.
 */
export function residualData(result: Result): string {
  const { rows, columns, uncertainty, take, frequency } = residualCells(result);
  const { takes, frequencies } = result.set;
  const uncertaintyText = rememberingLast(figureText);
  const lines = (text: (cell: number) => string) =>
    rows.map((_, r) => {
      let last = '';
      const cells = columns.map((__, c) => {
        const own = text(r * columns.length + c);
        const shown = own === last ? '' : own;
        last = own;
        return shown;
      });
      return cells.join();
    });
  const isGrouped = { rows: rows.length < takes.length, columns: columns.length < frequencies.length };
  const data = {
    u: lines((cell) => uncertaintyText(uncertainty[cell]!) || '-'),
    ...(isGrouped.rows ? { take: lines((cell) => takes[take[cell]!]?.id ?? '-') } : {}),
    ...(isGrouped.columns ? { frequency: lines((cell) => String(frequencies[frequency[cell]!] ?? '-')) } : {}),
  };
  // `<` could end the element; in JSON it may be written as its number.
  return `<script type="application/json" class="cells-data">${JSON.stringify(data).replaceAll('<', '\\u003c')}</script>`;
}
