import { roundedText } from '../../quantity/rounding.ts';
import type { NumbersTable } from './figure.ts';

/** A value rounded to its uncertainty, for tables of figures; empty where there is none. */
export function roundedCell(value: number, uncertainty: number): string {
  return Number.isFinite(value) ? roundedText(value, uncertainty) : '';
}

/** A figure that stands for itself, such as an uncertainty, to two significant digits. */
export function figureText(value: number): string {
  return Number.isFinite(value) ? roundedText(value, Math.abs(value)) : '';
}

/** The table as lines with commas; a cell that holds a comma, a quote or a line end is quoted. */
export function* numbersText({ columns, rows }: NumbersTable): Iterable<string> {
  yield lineOf(columns);
  let text = '';
  for (const row of rows()) {
    text += lineOf(row);
    if (text.length < CHUNK) continue;
    yield text;
    text = '';
  }
  if (text !== '') yield text;
}

const CHUNK = 1 << 16;

function lineOf(cells: readonly string[]): string {
  return `${cells.map((cell) => (/[",\r\n]/.test(cell) ? `"${cell.replaceAll('"', '""')}"` : cell)).join()}\n`;
}
