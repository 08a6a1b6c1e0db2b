import type { InputFault } from '../quantity/input-fault.ts';
import { growingColumn, optionalColumn } from './growing-columns.ts';
import type { InputFile, Readings, TakeHeader, UnusedRow } from './readings.ts';

/** The numbers of one reading; NaN where a row gives none. One record is filled again for every row. */
export interface ReadingValues {
  /** Hertz. */
  frequency: number;
  /** Decibels, known gain subtracted. */
  level: number;
  uncertainty: number;
  averages: number;
  coherence: number;
  noise: number;
}

/** Takes readings as they come and gives them back as columns. */
export interface ReadingCollector {
  readonly faults: InputFault[];
  readonly files: readonly InputFile[];
  /** Readings so far. */
  readonly count: number;
  /** @returns the take's index. */
  take(header: TakeHeader): number;
  reading(take: number, line: number, values: ReadingValues): void;
  readonly unusedRows: readonly UnusedRow[];
  unused(row: UnusedRow): void;
  notice(text: string): void;
  file(file: InputFile): void;
  readings(): Readings;
}

export function collectReadings(): ReadingCollector {
  const takes: TakeHeader[] = [];
  const files: InputFile[] = [];
  const unused: UnusedRow[] = [];
  const notices: string[] = [];
  const takeOf = growingColumn();
  const lines = growingColumn();
  const frequency = growingColumn();
  const level = growingColumn();
  const uncertainty = optionalColumn();
  const averages = optionalColumn();
  const coherence = optionalColumn();
  const noise = optionalColumn();
  return {
    faults: [],
    files,
    unusedRows: unused,
    get count() {
      return level.length;
    },
    take: (header) => takes.push(header) - 1,
    reading(take, line, values) {
      const entries = level.length;
      takeOf.push(take);
      lines.push(line);
      frequency.push(values.frequency);
      level.push(values.level);
      uncertainty.push(values.uncertainty, entries);
      averages.push(values.averages, entries);
      coherence.push(values.coherence, entries);
      noise.push(values.noise, entries);
    },
    unused(row) {
      // Many rows are left out for the same reason with the same blank: only what differs takes room.
      unused.push({ ...row, value: ownText(row.value) });
    },
    notice: (text) => notices.push(text),
    file: (file) => files.push(file),
    readings: () => ({
      files,
      takes,
      count: level.length,
      take: takeOf.toIntegers(),
      frequency: frequency.toArray(),
      level: level.toArray(),
      line: lines.toIntegers(),
      uncertainty: uncertainty.toArray(level.length),
      averages: averages.toArray(level.length),
      coherence: coherence.toArray(level.length),
      noise: noise.toArray(level.length),
      unused,
      notices,
    }),
  };
}

/**
 * A copy that does not hold on to the block of text it was cut from: an engine may keep a long piece of a string as a
 * view of the whole.
 */
export function ownText(text: string): string {
  return text.length < 13 ? text : JSON.parse(JSON.stringify(text));
}
