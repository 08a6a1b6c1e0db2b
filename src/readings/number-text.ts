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
/** One to three digits, not starting with 0, a comma and three digits: in English text, thousands. */
const COMMA_BEFORE_THREE = /^\s*[+\-\u2212]?[1-9]\d{0,2},\d{3}\s*$/;
const OTHER_BASE = /^\s*0[xbo]/i;

/** Which columns of a table hold numbers. */
export interface NumberColumns {
  readonly numeric: readonly number[];
  /** Those of them in dB: too small for thousands, so that a comma in them can only be a decimal one. */
  readonly decibels: readonly number[];
}

/** What the numbers of some rows tell of the decimal mark. */
export interface MarkFound {
  /** The mark that most numbers have; undefined where none tells. */
  readonly mark: DecimalMark | undefined;
  /** Whether there are commas, all of which could as well group thousands. */
  readonly isAmbiguous: boolean;
}

/**
 * The decimal mark of these rows, by majority. A comma before exactly three digits does not count outside columns of dB:
 * `1,000` may be one or a thousand.
 */
export function decimalMarkOf(rows: readonly (readonly string[])[], columns: NumberColumns): MarkFound {
  let points = 0;
  let commas = 0;
  let thousands = 0;
  for (const row of rows) {
    for (const column of columns.numeric) {
      const text = row[column] ?? '';
      if (POINT_NUMBER.test(text)) points++;
      else if (COMMA_NUMBER.test(text)) {
        if (COMMA_BEFORE_THREE.test(text) && !columns.decibels.includes(column)) thousands++;
        else commas++;
      }
    }
  }
  if (points === 0 && commas === 0) return { mark: undefined, isAmbiguous: thousands > 0 };
  return { mark: commas > points ? ',' : '.', isAmbiguous: false };
}

const AMBIGUOUS_COMMA =
  'a comma before three digits, which may be a decimal comma or group thousands; nothing in the file tells which';

/**
 * @param known the file's decimal mark; where it is not known, the first number that has one decides. A mark that groups
 * thousands is never accepted, so that `1,000` in a file with points is no number rather than 1, and neither where
 * nothing tells what the comma is.
 */
export function numberReader(known: DecimalMark | undefined): NumberReader {
  let mark = known;
  const read = (text: string): number => {
    if (mark === undefined && POINT_NUMBER.test(text)) mark = '.';
    if (mark === undefined && COMMA_NUMBER.test(text) && !COMMA_BEFORE_THREE.test(text)) mark = ',';
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
      if (mark === undefined && COMMA_BEFORE_THREE.test(text)) return AMBIGUOUS_COMMA;
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
