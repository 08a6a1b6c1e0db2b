import { InputError } from '../quantity/input-fault.ts';
import type { ReadingCollector } from './collect-readings.ts';
import { formulaName, READING_COLUMNS, type ReadingColumn } from './column-vocabulary.ts';
import { type LevelFormula, requireColumns } from './level-formula.ts';
import type { NumberColumns } from './number-text.ts';
import type { TablePlan } from './read-table.ts';
import { type Reject, rowValues } from './reading-values.ts';
import { missingColumns, type TableHeader, unknownNotice } from './table-header.ts';
import { takeOfRow } from './take-of-row.ts';

/** The right form, for messages. */
export const LONG_EXAMPLE =
  'a header line `emitter,receiver,frequency_hz,level_db` and below it rows such as `T01,T02,20000,-41.3`';

const REQUIRED: readonly ReadingColumn[] = ['emitter', 'receiver', 'frequency', 'level'];
const NUMERIC: readonly ReadingColumn[] = [
  'frequency',
  'level',
  'uncertainty',
  'averages',
  'coherence',
  'noise',
  'gain',
  'distance',
];
const DECIBELS: readonly ReadingColumn[] = ['level', 'uncertainty', 'noise', 'gain'];

/**
 * Reads a row per reading.
 * @param formula makes the level; then no level column is due and the columns that it names are known.
 * @throws InputError for a header that cannot be used.
 */
export function readLong(
  header: TableHeader<ReadingColumn>,
  formula: LevelFormula | undefined,
  collector: ReadingCollector,
): TablePlan {
  const required = formula === undefined ? REQUIRED : REQUIRED.slice(0, 3);
  const faults = [...header.faults, ...missingColumns(header, required, READING_COLUMNS, LONG_EXAMPLE)];
  if (faults.length > 0) throw new InputError(faults);
  const named = formulaColumns(header, formula);
  header.notices.forEach(collector.notice);
  const unknown = unknownNotice(header, named, (name) => name === 'file');
  if (unknown !== undefined) collector.notice(unknown);
  const reject = rejectInto(collector, header.file);
  return {
    ...numberColumns(header, named),
    start(number) {
      const values = rowValues(header, number, formula, reject);
      const takes = takeOfRow(header, number, collector, reject);
      return {
        row(fields, line) {
          if (!values.read(fields, line)) return;
          const take = takes.find(fields, line);
          if (take !== undefined) collector.reading(take, line, values.values);
        },
        reject: (line, value, reason) => reject(line, '', value, reason),
        end() {
          takes.end();
          values.end(collector);
        },
      };
    },
  };
}

/**
 * Columns that the program reads numbers from.
 * @param named those that the formula names.
 */
export function numberColumns(header: TableHeader<ReadingColumn>, named: readonly number[]): NumberColumns {
  const known = NUMERIC.flatMap((name) => header.known.get(name) ?? []);
  const decibels = DECIBELS.flatMap((name) => header.known.get(name) ?? []).filter(({ linear }) => !linear);
  return { numeric: [...known.map(({ index }) => index), ...named], decibels: decibels.map(({ index }) => index) };
}

/** Columns that the formula names. */
function formulaColumns(header: TableHeader<ReadingColumn>, formula: LevelFormula | undefined): number[] {
  if (formula === undefined) return [];
  const names = header.headers.map(formulaName);
  requireColumns(formula, header, names);
  return formula.names.map((name) => names.indexOf(name));
}

export function rejectInto(collector: ReadingCollector, file: string): Reject {
  return (line, column, value, reason) => collector.unused({ file, line, column, value, reason });
}
