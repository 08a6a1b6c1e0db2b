import type { InputFault } from '../quantity/input-fault.ts';
import type { ReadingCollector, ReadingValues } from './collect-readings.ts';
import { formulaName, meaningOf, READING_COLUMNS, type ReadingColumn } from './column-vocabulary.ts';
import type { LevelFormula } from './level-formula.ts';
import type { NumberReader } from './number-text.ts';
import {
  averagesTrouble,
  coherenceTrouble,
  frequencyTrouble,
  LARGEST_LEVEL,
  levelTrouble,
  uncertaintyTrouble,
} from './physical-limits.ts';
import type { KnownColumn, TableHeader } from './table-header.ts';

/** Makes the numbers of readings from the rows of one table. */
export interface RowValues {
  /** Filled again by each `read`. */
  readonly values: ReadingValues;
  /** Fills `values`; false, after `reject`, where the row cannot be used. */
  read(fields: readonly string[], line: number): boolean;
  /** Says what concerns the table as a whole: a formula that failed, gains left blank. */
  end(collector: Pick<ReadingCollector, 'faults' | 'notice'>): void;
}

/** What was noted for a take as a whole, outside its rows. NaN where nothing was. */
export interface TakeNumbers {
  readonly uncertainty: number;
  readonly averages: number;
  readonly coherence: number;
  readonly noise: number;
  readonly gain: number;
  /** Numbers that a level formula may name. */
  readonly named: ReadonlyMap<string, number>;
}

const NO_TAKE_NUMBERS: TakeNumbers = {
  uncertainty: Number.NaN,
  averages: Number.NaN,
  coherence: Number.NaN,
  noise: Number.NaN,
  gain: Number.NaN,
  named: new Map(),
};

/** Takes a value that cannot be used, with its column's header. */
export type Reject = (line: number, column: string, value: string, reason: string) => void;

/** Columns whose numbers a row may leave out, and what is wrong with a number that they cannot have. */
export const OPTIONAL_NUMBERS = {
  uncertainty: uncertaintyTrouble,
  averages: averagesTrouble,
  coherence: coherenceTrouble,
  noise: levelTrouble,
  gain: levelTrouble,
} as const;

type OptionalName = keyof typeof OPTIONAL_NUMBERS;
export const OPTIONAL_NAMES = Object.keys(OPTIONAL_NUMBERS) as OptionalName[];

/**
 * @param formula makes the level in place of a level column.
 * @param given numbers of the take as a whole; a number in a row goes before them.
 */
export function rowValues(
  header: TableHeader<ReadingColumn>,
  number: NumberReader,
  formula: LevelFormula | undefined,
  reject: Reject,
  given: TakeNumbers = NO_TAKE_NUMBERS,
): RowValues {
  const frequency = header.known.get('frequency')!;
  const level = header.known.get('level');
  const optional = OPTIONAL_NAMES.flatMap((name) => {
    const column = header.known.get(name);
    return column === undefined ? [] : [{ name, column, check: OPTIONAL_NUMBERS[name] }];
  });
  const byFormula = formula && formulaLevel(header, number, formula, given, reject);
  const gainCounted = formula?.names.includes(formulaName(header.known.get('gain')?.header ?? 'gain_db')) === true;
  const gain = header.known.get('gain');
  let blankGains = 0;
  let read = 0;
  const values: ReadingValues & { gain: number } = {
    frequency: 0,
    level: 0,
    uncertainty: Number.NaN,
    averages: Number.NaN,
    coherence: Number.NaN,
    noise: Number.NaN,
    gain: Number.NaN,
  };

  const readOptional = (fields: readonly string[], line: number): boolean => {
    for (const { name, column, check } of optional) {
      const text = fields[column.index]!;
      const value = number.read(text) * column.factor;
      const trouble = Number.isNaN(value) ? (text.trim() === '' ? '' : number.whyNot(text)) : check(value);
      if (trouble !== '') {
        reject(line, column.header, text, trouble);
        return false;
      }
      if (!Number.isNaN(value)) values[name] = value;
    }
    return true;
  };

  return {
    values,
    read(fields, line) {
      values.uncertainty = given.uncertainty;
      values.averages = given.averages;
      values.coherence = given.coherence;
      values.noise = given.noise;
      values.gain = given.gain;
      values.frequency = columnFrequency(frequency, fields[frequency.index]!, number, line, reject);
      if (Number.isNaN(values.frequency)) return false;
      if (optional.length > 0 && !readOptional(fields, line)) return false;
      if (byFormula !== undefined) {
        values.level = byFormula.level(fields, line);
        if (Number.isNaN(values.level)) return false;
        if (!Number.isNaN(values.noise)) {
          values.noise = byFormula.noise(fields, values.noise);
          const trouble = levelTrouble(values.noise);
          if (trouble !== '') {
            reject(line, '', `${values.noise}`, `the formula makes this of the background noise: ${trouble}`);
            return false;
          }
        }
      } else values.level = columnLevel(level!, fields[level!.index]!, number, line, reject);
      if (Number.isNaN(values.level)) return false;
      read++;
      if (gainCounted) return true;
      if (Number.isNaN(values.gain)) blankGains++;
      else {
        // Noise runs through the same gain as the level.
        values.level -= values.gain;
        values.noise -= values.gain;
      }
      return true;
    },
    end(collector) {
      const fault = byFormula?.fault();
      if (fault !== undefined) collector.faults.push(fault);
      if (gain !== undefined && blankGains > 0 && blankGains < read) {
        collector.notice(
          `${header.file}: \`${gain.header}\` is blank in ${blankGains} of ${read} rows; no gain is subtracted there.`,
        );
      }
    },
  };
}

/** The frequency of one cell in hertz, or NaN after `reject`. */
export function columnFrequency(
  column: KnownColumn,
  text: string,
  number: NumberReader,
  line: number,
  reject: Reject,
): number {
  const value = number.read(text) * column.factor;
  const trouble = Number.isNaN(value) ? number.whyNot(text) : frequencyTrouble(value);
  if (trouble === '') return value;
  reject(line, column.header, text, trouble);
  return Number.NaN;
}

const NOT_MEASURED = 'not measured: blank';
const ZERO_LEVEL = 'not measured: exactly 0 where a level is due';
const ZERO_RATIO = 'not measured: an amplitude ratio of 0 has no level';
const NEGATIVE_RATIO = 'an amplitude ratio must be above 0';
const ABSURD_RATIO = `no amplitude ratio can lie beyond ${LARGEST_LEVEL} dB either way`;

/**
 * The level of one cell, or NaN after `reject`. A blank means 'not measured', and so does an exact 0.
 * @param isForFormula the cell is a number that a formula makes the level of, whatever it may be.
 */
export function columnLevel(
  column: KnownColumn,
  text: string,
  number: NumberReader,
  line: number,
  reject: Reject,
  isForFormula = false,
): number {
  const value = number.read(text);
  let reason: string;
  if (Number.isNaN(value)) reason = text.trim() === '' ? NOT_MEASURED : number.whyNot(text);
  else if (column.linear) {
    const level = 20 * Math.log10(value);
    if (Math.abs(level) <= LARGEST_LEVEL) return level;
    reason = value === 0 ? ZERO_RATIO : value < 0 ? NEGATIVE_RATIO : ABSURD_RATIO;
  } else if (isForFormula) return value;
  else {
    reason = value === 0 ? ZERO_LEVEL : levelTrouble(value);
    if (reason === '') return value;
  }
  reject(line, column.header, text, reason);
  return Number.NaN;
}

function formulaLevel(
  header: TableHeader<ReadingColumn>,
  number: NumberReader,
  formula: LevelFormula,
  given: TakeNumbers,
  reject: Reject,
) {
  const names = header.headers.map(formulaName);
  const columns = formula.names.map((name) => names.indexOf(name));
  const inputs = Float64Array.from(formula.names, (name) => given.named.get(name) ?? Number.NaN);
  const meanings = columns.map((column) => meaningOf(header.headers[column] ?? '', READING_COLUMNS));
  const levelInput = meanings.findIndex((meaning) => meaning?.kind === 'known' && meaning.rule.name === 'level');
  const meaning = meanings[levelInput];
  const linear = meaning?.kind === 'known' && meaning.rule.linear === true;
  let failures = 0;
  let first: InputFault | undefined;
  return {
    level(fields: readonly string[], line: number): number {
      for (let i = 0; i < columns.length; i++) {
        const column = columns[i]!;
        if (column < 0) continue;
        const text = fields[column]!;
        inputs[i] = number.read(text);
        if (!Number.isNaN(inputs[i])) continue;
        reject(line, header.headers[column]!, text, text.trim() === '' ? NOT_MEASURED : number.whyNot(text));
        return Number.NaN;
      }
      const level = formula.level(inputs);
      if (Number.isFinite(level)) {
        const trouble = levelTrouble(level);
        if (trouble === '') return level;
        reject(line, '', `${level}`, `the formula makes this of the row: ${trouble}`);
        return Number.NaN;
      }
      failures++;
      first ??= {
        place: { file: header.file, line },
        found: `no finite level from the formula \`${formula.text}\` with ${formula.names.map((name, i) => `${name} = ${inputs[i]}`).join(', ')}`,
        expected: 'a formula that gives a finite level in dB for every row',
        remedy: 'Correct the formula or the numbers; leave a cell blank where nothing was measured.',
      };
      return Number.NaN;
    },
    /** Noise takes the same way as the level, where the formula starts from a level; else it is on the formula's scale. */
    noise(fields: readonly string[], noise: number): number {
      if (levelInput < 0) return noise;
      for (let i = 0; i < columns.length; i++) if (columns[i]! >= 0) inputs[i] = number.read(fields[columns[i]!]!);
      inputs[levelInput] = linear ? 10 ** (noise / 20) : noise;
      return formula.level(inputs);
    },
    fault(): InputFault | undefined {
      if (first === undefined || failures === 1) return first;
      return { ...first, found: `${first.found}, and in ${failures - 1} more rows of this file none` };
    },
  };
}
