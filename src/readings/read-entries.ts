import { InputError, type InputFault } from '../quantity/input-fault.ts';
import type { Place } from '../quantity/place.ts';
import { type ColumnRule, meaningOf } from './column-vocabulary.ts';
import type { NumberReader } from './number-text.ts';
import { frequencyTrouble, levelTrouble } from './physical-limits.ts';
import { readTable } from './read-table.ts';
import type { InputFile } from './readings.ts';
import type { Source } from './source.ts';
import { missingColumns, readHeader, type TableHeader, unknownNotice } from './table-header.ts';

/** A row of a table in which every row counts, such as a certificate. */
export interface EntryRow<Name extends string> {
  readonly line: number;
  /** The trimmed text of a column; empty where there is no such column. */
  text(name: Name): string;
  /** Undefined where there is no such column or it is blank; `undefined` too, after a fault, where it is no number. */
  number(name: Name): number | undefined;
  /** Collects a fault of this row. */
  fault(name: Name, found: string, expected: string, remedy: string): void;
}

export interface EntryTable<Name extends string, Entry> {
  readonly rules: readonly ColumnRule<Name>[];
  readonly required: readonly Name[];
  readonly numeric: readonly Name[];
  /** Those of them in dB. */
  readonly decibels: readonly Name[];
  readonly example: string;
  readonly layout: InputFile['layout'];
  /** Called once the header is understood. */
  readonly checkHeader?: (header: TableHeader<Name>) => InputFault[];
  /** Undefined, after a fault, where the row cannot be used. */
  readonly entry: (row: EntryRow<Name>) => Entry | undefined;
}

/** What a table gave, with its file and what is worth saying about it. */
export interface Entries<Entry> {
  readonly entries: readonly Entry[];
  readonly file: InputFile;
  readonly notices: readonly string[];
}

/**
 * Reads a table in which each row must be usable: a number that the user vouches for is never left out. Columns that are
 * not known are, with a notice.
 * @throws InputError with all faults of the file.
 */
export async function readEntries<Name extends string, Entry>(
  source: Source,
  table: EntryTable<Name, Entry>,
): Promise<Entries<Entry>> {
  const entries: Entry[] = [];
  const notices: string[] = [];
  const faults: InputFault[] = [];
  const { rules, required, example } = table;
  const { sha256, bytes, rows } = await readTable(source, {
    knows: (header) => meaningOf(header, rules) !== undefined,
    example,
    onBytes: () => {},
    onNotice: (notice) => notices.push(notice),
    header(fields, line) {
      const header = readHeader(source.name, fields, line, rules);
      const headerFaults = [...header.faults, ...missingColumns(header, required, rules, example)];
      headerFaults.push(...(table.checkHeader?.(header) ?? []));
      if (headerFaults.length > 0) throw new InputError(headerFaults);
      notices.push(...header.notices, ...[unknownNotice(header) ?? []].flat());
      const columns = (names: readonly Name[]) => names.flatMap((name) => header.known.get(name)?.index ?? []);
      return {
        numeric: columns(table.numeric),
        decibels: columns(table.decibels),
        start: (number) => ({
          row(values, at) {
            const before = faults.length;
            const entry = table.entry(entryRow(header, values, at, number, faults));
            if (entry !== undefined && faults.length === before) entries.push(entry);
          },
          reject(at, value, reason) {
            faults.push({
              place: { file: source.name, line: at },
              found: `\`${value}\`: ${reason}`,
              expected: example,
              remedy: 'Correct the row.',
            });
          },
        }),
      };
    },
  });
  if (faults.length > 0) throw new InputError(faults);
  return { entries, file: { name: source.name, layout: table.layout, sha256, bytes, rows }, notices };
}

function entryRow<Name extends string>(
  header: TableHeader<Name>,
  fields: readonly string[],
  line: number,
  number: NumberReader,
  faults: InputFault[],
): EntryRow<Name> {
  const text = (name: Name) => {
    const column = header.known.get(name);
    return column === undefined ? '' : fields[column.index]!.trim();
  };
  const fault = (name: Name, found: string, expected: string, remedy: string) => {
    const column = header.known.get(name)?.header;
    const place = { file: header.file, line };
    faults.push({ place: column === undefined ? place : { ...place, column }, found, expected, remedy });
  };
  return {
    line,
    text,
    number(name) {
      const written = text(name);
      if (written === '') return undefined;
      const value = number.read(written);
      if (!Number.isNaN(value)) return value * header.known.get(name)!.factor;
      fault(name, `\`${written}\` (${number.whyNot(written)})`, 'a number', 'Correct the number.');
      return undefined;
    },
    fault,
  };
}

/** One value of a spectrum that is vouched for. */
export interface EntryValue {
  readonly line: number;
  readonly frequency: number;
  readonly level: number;
  readonly uncertainty: number;
}

/** Frequency and level of a row; undefined, after a fault, where one of them is absent or no number. */
export function frequencyAndLevel<Name extends string>(
  row: EntryRow<Name | 'frequency' | 'level'>,
): { readonly frequency: number; readonly level: number } | undefined {
  for (const name of ['frequency', 'level'] as const) {
    if (row.text(name) === '') row.fault(name, 'a blank', 'a number', 'Fill in the number, or take the row out.');
  }
  const frequency = row.number('frequency');
  const level = row.number('level');
  if (frequency === undefined || level === undefined) return undefined;
  const troubles = [
    ['frequency', frequencyTrouble(frequency)],
    ['level', levelTrouble(level)],
  ] as const;
  const found = troubles.filter(([, trouble]) => trouble !== '');
  for (const [name, trouble] of found) {
    row.fault(name, `\`${row.text(name)}\`: ${trouble}`, `a ${name} that can be measured`, `Correct the ${name}.`);
  }
  return found.length === 0 ? { frequency, level } : undefined;
}

/**
 * Brings the values of each key together, frequencies ascending, keys in the order of their first row, with its place.
 * @throws InputError where a frequency comes twice for one key.
 */
export function spectraOf<Key extends object>(
  file: string,
  entries: readonly { readonly key: Key; readonly value: EntryValue }[],
): {
  readonly key: Key;
  readonly place: Place;
  readonly frequency: Float64Array;
  readonly level: Float64Array;
  readonly uncertainty: Float64Array;
}[] {
  const groups = new Map<string, { key: Key; place: Place; values: EntryValue[] }>();
  for (const { key, value } of entries) {
    const name = JSON.stringify(key);
    const group = groups.get(name);
    if (group === undefined) groups.set(name, { key, place: { file, line: value.line }, values: [value] });
    else group.values.push(value);
  }
  const faults: InputFault[] = [];
  const spectra = [...groups.values()].map(({ key, place, values }) => {
    values.sort((a, b) => a.frequency - b.frequency || a.line - b.line);
    values.forEach((value, i) => {
      const before = values[i - 1];
      if (before?.frequency !== value.frequency) return;
      faults.push({
        place: { file, line: value.line },
        found: `${value.frequency} Hz a second time for ${Object.values(key)
          .filter((part) => part !== '')
          .join(' ')} (first in line ${before.line})`,
        expected: 'each frequency once',
        remedy: 'Remove one of the two rows.',
      });
    });
    const column = (name: 'frequency' | 'level' | 'uncertainty') => Float64Array.from(values, (value) => value[name]);
    return { key, place, frequency: column('frequency'), level: column('level'), uncertainty: column('uncertainty') };
  });
  if (faults.length > 0) throw new InputError(faults);
  return spectra;
}
