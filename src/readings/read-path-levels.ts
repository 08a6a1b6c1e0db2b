import { PATH_LEVEL_COLUMNS, type PathLevelColumn } from './column-vocabulary.ts';
import { type EntryRow, frequencyAndLevel, readEntries, spectraOf } from './read-entries.ts';
import type { PathLevel } from './references.ts';
import type { Source } from './source.ts';

const EXAMPLE =
  'a header line `path,frequency_hz,level_db,u_db` and below it rows such as `water-1m,20000,-3.2,0.1` (`u_db` may be left out)';

/**
 * Reads the levels of paths (`--path CSV`). 0 dB is a level here; a blank or absent `u_db` makes the level exact.
 * Columns that are not known are passed over.
 * @throws InputError with every fault: no row is left out.
 */
export async function readPathLevels(source: Source): Promise<PathLevel[]> {
  const entries = await readEntries(source, {
    rules: PATH_LEVEL_COLUMNS,
    required: ['path', 'frequency', 'level'],
    numeric: ['frequency', 'level', 'uncertainty'],
    example: EXAMPLE,
    entry: entryOf,
  });
  return spectraOf(source.name, entries).map(({ key, ...spectrum }) => ({ ...key, ...spectrum }));
}

function entryOf(row: EntryRow<PathLevelColumn>) {
  const path = row.text('path');
  if (path === '') row.fault('path', 'a blank', 'the name of a path', 'Name the path.');
  const value = frequencyAndLevel(row);
  const uncertainty = row.number('uncertainty') ?? Number.NaN;
  if (uncertainty <= 0) {
    row.fault(
      'uncertainty',
      `\`${row.text('uncertainty')}\``,
      'a standard uncertainty above 0, or a blank for an exact level',
      'Correct the uncertainty.',
    );
  }
  if (path === '' || value === undefined) return undefined;
  return { key: { path }, value: { line: row.line, ...value, uncertainty } };
}
