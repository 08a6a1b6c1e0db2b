import { InputError } from '../quantity/input-fault.ts';
import type { ReadingCollector } from './collect-readings.ts';
import { formulaName, READING_COLUMNS, type ReadingColumn } from './column-vocabulary.ts';
import type { LevelFormula } from './level-formula.ts';
import type { NumberReader } from './number-text.ts';
import { numberColumns, rejectInto } from './read-long.ts';
import type { LoggedTake } from './read-spectrum.ts';
import type { TablePlan } from './read-table.ts';
import { OPTIONAL_NAMES, OPTIONAL_NUMBERS, type Reject, type TakeNumbers } from './reading-values.ts';
import { missingColumns, type TableHeader, unknownNotice } from './table-header.ts';
import { fewRemarks, takeHeaderOf } from './take-of-row.ts';

/** The right form, for messages. */
export const LOG_EXAMPLE =
  'a header line `file,emitter,receiver` and below it rows such as `spectra/t01-t02.csv,T01,T02`';

/** A row of a bench log that can be used. */
export interface LogRow {
  /** Relative to the log. */
  readonly path: string;
  readonly line: number;
  readonly take: LoggedTake;
}

/**
 * Reads the rows of a bench log, a take each; the named files are read afterwards.
 * @param rows takes the rows that can be used.
 * @throws InputError for a header that cannot be used.
 */
export function readBenchLog(
  header: TableHeader<ReadingColumn>,
  formula: LevelFormula | undefined,
  collector: ReadingCollector,
  rows: LogRow[],
): TablePlan {
  const faults = [
    ...header.faults,
    ...missingColumns(header, ['file', 'emitter', 'receiver'], READING_COLUMNS, LOG_EXAMPLE),
  ];
  if (faults.length > 0) throw new InputError(faults);
  const names = header.headers.map(formulaName);
  const named = (formula?.names ?? []).filter((name) => names.includes(name));
  const namedAt = named.map((name) => names.indexOf(name));
  header.notices.forEach(collector.notice);
  const unknown = unknownNotice(header, namedAt, (name) => name === 'level');
  if (unknown !== undefined) collector.notice(unknown);
  const file = header.known.get('file')!;
  const reject = rejectInto(collector, header.file);
  const remarks = fewRemarks(header.file, collector);
  return {
    ...numberColumns(header, namedAt),
    start: (number) => ({
      row(fields, line) {
        const path = fields[file.index]!.trim();
        if (path === '') {
          reject(line, file.header, '', 'no file is named');
          return;
        }
        const take = takeHeaderOf(header, fields, line, number, reject, remarks.say);
        const numbers = take && takeNumbers(header, fields, line, number, named, namedAt, reject);
        if (take !== undefined && numbers !== undefined) rows.push({ path, line, take: { header: take, numbers } });
      },
      reject: (line, value, reason) => reject(line, '', value, reason),
      end: remarks.end,
    }),
  };
}

/** Undefined, after `reject`, where one of the numbers cannot be used. */
function takeNumbers(
  header: TableHeader<ReadingColumn>,
  fields: readonly string[],
  line: number,
  number: NumberReader,
  named: readonly string[],
  namedAt: readonly number[],
  reject: Reject,
): TakeNumbers | undefined {
  const numbers = { uncertainty: NaN, averages: NaN, coherence: NaN, noise: NaN, gain: NaN };
  for (const name of OPTIONAL_NAMES) {
    const column = header.known.get(name);
    const text = column === undefined ? '' : fields[column.index]!;
    if (column === undefined || text.trim() === '') continue;
    const value = number.read(text) * column.factor;
    const trouble = Number.isNaN(value) ? number.whyNot(text) : OPTIONAL_NUMBERS[name](value);
    if (trouble !== '') {
      reject(line, column.header, text, trouble);
      return undefined;
    }
    numbers[name] = value;
  }
  const forFormula = new Map<string, number>();
  for (const [i, name] of named.entries()) {
    const text = fields[namedAt[i]!]!;
    const value = number.read(text);
    if (Number.isNaN(value)) {
      reject(line, header.headers[namedAt[i]!]!, text, number.whyNot(text));
      return undefined;
    }
    forFormula.set(name, value);
  }
  return { ...numbers, named: forFormula };
}
