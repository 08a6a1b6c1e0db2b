import { stringify } from 'csv-stringify/sync';
import type { OutputFile } from './result.ts';

/** One column of a table: its header, and the text of its cell; an empty text means 'not available'. */
export interface Column<Row> {
  readonly name: string;
  readonly text: (row: Row) => string;
}

/** Rows handed to the library at once: small enough to stay out of the way, large enough for its start to vanish. */
const ROWS_A_CHUNK = 2000;

/**
 * The user's labels are written as they are, quoted where CSV needs it. Quoted beyond that: a leading `#`, which would
 * start a comment, and blanks at either end, which readers like to trim.
 */
const OPTIONS = { quoted_match: /^[#\s]|\s$/ };

/** A CSV file: UTF-8, comma, header row, LF. Rows are made while they are written, `ROWS_A_CHUNK` at a time. */
export function csvFile<Row>(name: string, columns: readonly Column<Row>[], rows: () => Iterable<Row>): OutputFile {
  return {
    name,
    chunks: function* () {
      yield csvLines([columns.map((column) => column.name)]);
      let block: string[][] = [];
      for (const row of rows()) {
        block.push(columns.map((column) => column.text(row)));
        if (block.length < ROWS_A_CHUNK) continue;
        yield csvLines(block);
        block = [];
      }
      if (block.length > 0) yield csvLines(block);
    },
  };
}

/** Rows as CSV text, each with its line feed. */
export function csvLines(rows: readonly (readonly string[])[]): string {
  return stringify(rows as string[][], OPTIONS);
}
