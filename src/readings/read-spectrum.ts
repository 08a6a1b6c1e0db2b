import { InputError } from '../quantity/input-fault.ts';
import type { ReadingCollector } from './collect-readings.ts';
import { type ColumnRule, formulaName, type ReadingColumn } from './column-vocabulary.ts';
import { type LevelFormula, requireColumns } from './level-formula.ts';
import { decimalMarkOf, numberReader } from './number-text.ts';
import { numberColumns, rejectInto } from './read-long.ts';
import { lengthReason } from './read-table.ts';
import { OPTIONAL_NAMES, rowValues, type TakeNumbers } from './reading-values.ts';
import type { TakeHeader } from './readings.ts';
import { recordReader } from './records.ts';
import type { Source } from './source.ts';
import { findSpectrum, type SpectrumStart } from './spectrum-table.ts';
import { readHeader, type TableHeader, unknownNotice } from './table-header.ts';
import { textBlocks } from './text-blocks.ts';

/** The right form, for messages. */
export const SPECTRUM_EXAMPLE =
  'a header line `frequency_hz,level_db` and below it rows such as `20000,-41.3`, or two columns of such numbers';

const WITHOUT_HEADER = ['frequency_hz', 'level_db'];

/** What a bench log says of the spectrum that it names. */
export interface LoggedTake {
  readonly header: Omit<TakeHeader, 'file' | 'line'>;
  readonly numbers: TakeNumbers;
}

/** Headers whose notices were said already, with the first file that has them and how many more there are. */
export type ToldHeaders = Map<string, { readonly file: string; more: number }>;

export interface SpectrumFacts {
  readonly sha256: string;
  readonly bytes: number;
  readonly rows: number;
  readonly hasHeader: boolean;
}

/**
 * Reads a file that holds one take: columns of frequency and level, with or without headers, below any preamble.
 * @throws InputError where no table is found or its columns cannot be told.
 */
export async function readSpectrum(
  source: Source,
  take: LoggedTake,
  rules: readonly ColumnRule<ReadingColumn>[],
  formula: LevelFormula | undefined,
  collector: ReadingCollector,
  told: ToldHeaders,
  onBytes: (count: number) => void,
): Promise<SpectrumFacts> {
  const { lines, digest } = await allLines(source, onBytes);
  const start = findSpectrum(source.name, lines, rules, formula === undefined);
  if (start === undefined) throw noTable(source.name, lines);
  const header = start.header ?? assumedHeader(source.name, start, rules, formula);
  if (header.faults.length > 0) throw new InputError(header.faults);
  refuseDoubled(header, take.numbers);
  const named = formulaColumns(header, take.numbers, formula);
  sayOnce(header, named, collector, told);

  const records: { fields: string[]; line: number }[] = [];
  const reader = recordReader(source.name, {
    separator: () => start.separator,
    comment: () => {},
    record: (fields, line) => records.push({ fields, line }),
  });
  // Blank lines in place of the preamble keep the count of lines.
  const from = start.header === undefined ? start.at : start.at + 1;
  reader.push('\n'.repeat(from) + lines.slice(from).join('\n'));
  reader.finish();

  const { mark } = decimalMarkOf(
    records.map(({ fields }) => fields),
    numberColumns(header, named),
  );
  const number = numberReader(mark);
  const reject = rejectInto(collector, source.name);
  const values = rowValues(header, number, formula, reject, take.numbers);
  let index: number | undefined;
  for (const { fields, line } of records) {
    if (
      fields.length < header.headers.length ||
      fields.slice(header.headers.length).some((text) => text.trim() !== '')
    ) {
      reject(
        line,
        '',
        fields.join(start.separator).slice(0, 200),
        lengthReason(fields.length, header.headers.length, start.separator),
      );
    } else if (values.read(fields, line)) {
      index ??= collector.take({ ...take.header, file: source.name, line });
      collector.reading(index, line, values.values);
    }
  }
  values.end(collector);
  return { ...digest, rows: records.length, hasHeader: start.header !== undefined };
}

const READ: ReadonlySet<ReadingColumn> = new Set(['frequency', 'level', ...OPTIONAL_NAMES]);

/** The spectra of a log mostly have one header: its notices are said for the first of them. */
function sayOnce(
  header: TableHeader<ReadingColumn>,
  named: readonly number[],
  collector: ReadingCollector,
  told: ToldHeaders,
): void {
  const unknown = unknownNotice(header, named, (name) => !READ.has(name));
  const notices = unknown === undefined ? header.notices : [...header.notices, unknown];
  if (notices.length === 0) return;
  const key = header.headers.join('\n');
  const before = told.get(key);
  if (before !== undefined) before.more++;
  else {
    told.set(key, { file: header.file, more: 0 });
    notices.forEach(collector.notice);
  }
}

async function allLines(source: Source, onBytes: (count: number) => void) {
  const blocks = textBlocks(source, onBytes);
  const text: string[] = [];
  let step = await blocks.next();
  for (; !step.done; step = await blocks.next()) text.push(step.value);
  const whole = text.join('').replace(/\r\n?/g, '\n');
  return { lines: whole.replace(/\n$/, '').split('\n'), digest: step.value };
}

/** Two columns without headers can only be frequency and level; with more of them nobody can tell. */
function assumedHeader(
  file: string,
  start: SpectrumStart,
  rules: readonly ColumnRule<ReadingColumn>[],
  formula: LevelFormula | undefined,
): TableHeader<ReadingColumn> {
  const columns = start.fields.length;
  if (columns === 2) return readHeader(file, WITHOUT_HEADER, start.at + 1, rules);
  const cause = start.separator === ',' ? '; a decimal comma beside a comma as separator also looks like this' : '';
  throw new InputError([
    {
      place: { file, line: start.at + 1 },
      found: `${columns} columns of numbers without a header that names a frequency and a level${cause}`,
      expected: formula === undefined ? SPECTRUM_EXAMPLE : 'a header that names the columns of the formula',
      remedy: 'Write a header line with the unit in each name above the numbers.',
    },
  ]);
}

function noTable(file: string, lines: readonly string[]): InputError {
  const empty = lines.every((line) => line.trim() === '');
  return new InputError([
    {
      place: { file },
      found: empty ? 'an empty file' : 'no table of frequency and level',
      expected: SPECTRUM_EXAMPLE,
      remedy: 'Correct the file, or take its row out of the log.',
    },
  ]);
}

/** A number in the log and a column in the file for the same thing: nobody can tell which is meant. */
function refuseDoubled(header: TableHeader<ReadingColumn>, numbers: TakeNumbers): void {
  const faults = OPTIONAL_NAMES.flatMap((name) => {
    const column = header.known.get(name);
    if (column === undefined || Number.isNaN(numbers[name])) return [];
    return [
      {
        place: { file: header.file, line: header.line, column: column.header },
        found: `\`${column.header}\` here and ${numbers[name]} in the log`,
        expected: 'it in one place',
        remedy: 'Leave it blank in the log, or take the column out of the file.',
      },
    ];
  });
  if (faults.length > 0) throw new InputError(faults);
}

/** Places of the formula's columns in the file; those of the log are not among them. */
function formulaColumns(
  header: TableHeader<ReadingColumn>,
  numbers: TakeNumbers,
  formula: LevelFormula | undefined,
): number[] {
  if (formula === undefined) return [];
  const names = header.headers.map(formulaName);
  requireColumns(formula, header, [...names, ...numbers.named.keys()]);
  return formula.names.map((name) => names.indexOf(name)).filter((index) => index >= 0);
}
