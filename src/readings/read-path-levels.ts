import { InputError, type InputFault } from '../quantity/input-fault.ts';
import { PATH_LEVEL_COLUMNS, type PathLevelColumn } from './column-vocabulary.ts';
import { uncertaintyTrouble } from './physical-limits.ts';
import { type EntryRow, type EntryValue, frequencyAndLevel, readEntries, spectraOf } from './read-entries.ts';
import type { InputFile } from './readings.ts';
import type { PathLevel } from './references.ts';
import type { Source } from './source.ts';

const EXAMPLE =
  'a header line `path,frequency_hz,level_db,u_db` and below it rows such as `water-1m,20000,-3.2,0.1` (`u_db` may be left out)';

/** The levels of a table, with its file and what is worth saying about it. */
export interface PathLevelsRead {
  readonly levels: readonly PathLevel[];
  readonly file: InputFile;
  readonly notices: readonly string[];
}

/**
 * Reads the levels of paths (`--path CSV`). 0 dB is a level here; a blank or absent `u_db` makes the level exact, and is
 * due in all rows of a path or in none. Columns that are not known are left out, with a notice.
 * @throws InputError with every fault: no row is left out.
 */
export async function readPathLevels(source: Source): Promise<PathLevelsRead> {
  const { entries, file, notices } = await readEntries(source, {
    rules: PATH_LEVEL_COLUMNS,
    required: ['path', 'frequency', 'level'],
    numeric: ['frequency', 'level', 'uncertainty'],
    decibels: ['level', 'uncertainty'],
    example: EXAMPLE,
    layout: 'path levels',
    entry: entryOf,
  });
  const faults = halfUncertain(source.name, entries);
  if (faults.length > 0) throw new InputError(faults);
  const levels = spectraOf(source.name, entries).map(({ key, ...spectrum }) => ({ ...key, ...spectrum }));
  return { levels, file, notices };
}

interface PathEntry {
  readonly key: { readonly path: string };
  readonly value: EntryValue;
}

function entryOf(row: EntryRow<PathLevelColumn>): PathEntry | undefined {
  const path = row.text('path');
  if (path === '') row.fault('path', 'a blank', 'the name of a path', 'Name the path.');
  const value = frequencyAndLevel(row);
  const uncertainty = row.number('uncertainty');
  const trouble = uncertainty === undefined ? '' : uncertaintyTrouble(uncertainty);
  if (trouble !== '') {
    row.fault(
      'uncertainty',
      `\`${row.text('uncertainty')}\`: ${trouble}`,
      'a standard uncertainty above 0, or a blank for an exact level',
      'Correct the uncertainty.',
    );
  }
  if (path === '' || value === undefined) return undefined;
  return { key: { path }, value: { line: row.line, ...value, uncertainty: uncertainty ?? Number.NaN } };
}

/** One fault a path, at its first row that differs from the row before. */
function halfUncertain(file: string, entries: readonly PathEntry[]): InputFault[] {
  const first = new Map<string, EntryValue>();
  const faults = new Map<string, InputFault>();
  for (const { key, value } of entries) {
    const before = first.get(key.path);
    if (before === undefined) first.set(key.path, value);
    if (before === undefined || faults.has(key.path)) continue;
    if (Number.isNaN(before.uncertainty) === Number.isNaN(value.uncertainty)) continue;
    const [here, there] = Number.isNaN(value.uncertainty) ? ['no u_db', 'has one'] : ['a u_db', 'has none'];
    faults.set(key.path, {
      place: { file, line: value.line, column: 'u_db' },
      found: `${here} for the path ${key.path}, which ${there} in line ${before.line}`,
      expected: 'an uncertainty in all rows of a path (a known level), or in none (an exact one)',
      remedy: 'Fill in `u_db` for this path, or leave it out.',
    });
  }
  return [...faults.values()];
}
