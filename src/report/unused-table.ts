import type { UnusedRow } from '../readings/readings.ts';
import { type Column, csvFile } from './csv-file.ts';
import type { OutputFile, Result } from './result.ts';

const COLUMNS: readonly Column<UnusedRow>[] = [
  { name: 'file', text: (row) => row.file },
  { name: 'line', text: (row) => String(row.line) },
  { name: 'column', text: (row) => row.column },
  { name: 'value', text: (row) => row.value },
  { name: 'reason', text: (row) => row.reason },
];

/** `unused.csv`: every row that could not be used, and why; only its header where all could. */
export function unusedTable({ input }: Result): OutputFile {
  return csvFile('unused.csv', COLUMNS, () => input.unused);
}
