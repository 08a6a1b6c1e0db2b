/** Reads the numbers of one file, all with one decimal mark. */
export interface NumberReader {
  /** The number that `text` is, or NaN: for a blank, a word, NaN, infinity, or another decimal mark. */
  read(text: string): number;
  /** Why `read` made no number of it, as a reason that can be printed. */
  whyNot(text: string): string;
}

export type DecimalMark = '.' | ',';

const POINT_NUMBER = /^\s*[+\-\u2212]?\d*\.\d+(?:e[+-]?\d+)?\s*$/i;
const COMMA_NUMBER = /^\s*[+\-\u2212]?\d*,\d+(?:e[+-]?\d+)?\s*$/i;
const OTHER_BASE = /^\s*0[xbo]/i;

/**
 * The decimal mark that most numbers of these rows have; undefined where none has any.
 * @param columns the columns that hold numbers.
 */
export function decimalMarkOf(
  rows: readonly (readonly string[])[],
  columns: readonly number[],
): DecimalMark | undefined {
  let points = 0;
  let commas = 0;
  for (const row of rows) {
    for (const column of columns) {
      const text = row[column] ?? '';
      if (POINT_NUMBER.test(text)) points++;
      else if (COMMA_NUMBER.test(text)) commas++;
    }
  }
  if (points === 0 && commas === 0) return undefined;
  return commas > points ? ',' : '.';
}

/**
 * @param known the file's decimal mark; where it is not known, the first number that has one decides. A mark that groups
 * thousands is never accepted, so that `1,000` in a file with points is no number rather than 1.
 */
export function numberReader(known: DecimalMark | undefined): NumberReader {
  let mark = known;
  const read = (text: string): number => {
    if (mark === undefined) mark = POINT_NUMBER.test(text) ? '.' : COMMA_NUMBER.test(text) ? ',' : undefined;
    if (mark !== ',') return checked(Number(text), text);
    if (text.includes('.')) return Number.NaN;
    const pointed = text.replace(',', '.');
    return checked(Number(pointed), pointed);
  };
  return {
    read,
    whyNot(text) {
      const word = text.trim();
      if (word === '') return 'blank';
      if (mark === ',' && text.includes('.')) return 'a decimal point in a file whose numbers have decimal commas';
      if (mark !== ',' && text.includes(',')) return 'a decimal comma in a file whose numbers have decimal points';
      return 'not a finite number';
    },
  };
}

/** `Number` makes 0 of a blank, reads hexadecimal and `Infinity`, and knows no typographic minus. */
function checked(value: number, text: string): number {
  if (value !== 0 && Number.isFinite(value))
    return Number.isInteger(value) && OTHER_BASE.test(text) ? Number.NaN : value;
  if (Number.isNaN(value) && text.includes('\u2212')) {
    const ascii = text.replaceAll('\u2212', '-');
    return checked(Number(ascii), ascii);
  }
  return value === 0 && text.trim() !== '' && !OTHER_BASE.test(text) ? value : Number.NaN;
}
