import type { InputFault } from '../quantity/input-fault.ts';
import { REFERENCE_COLUMNS, type ReferenceColumn } from './column-vocabulary.ts';
import { uncertaintyTrouble } from './physical-limits.ts';
import { type EntryRow, frequencyAndLevel, readEntries, spectraOf } from './read-entries.ts';
import type { InputFile } from './readings.ts';
import type { Reference } from './references.ts';
import type { Source } from './source.ts';
import type { TableHeader } from './table-header.ts';

const EXAMPLE =
  'a header line `unit,role,frequency_hz,level_db,u_db` and below it rows such as `T01,receive,20000,-186.2,0.3`, or `expanded_db,k` instead of `u_db`';

const ROLES: ReadonlyMap<string, Reference['role']> = new Map([
  ['', 'both'],
  ['both', 'both'],
  ['emit', 'emit'],
  ['emitter', 'emit'],
  ['receive', 'receive'],
  ['receiver', 'receive'],
]);

/** The certificates of a table, with its file and what is worth saying about it. */
export interface ReferencesRead {
  readonly references: readonly Reference[];
  readonly file: InputFile;
  readonly notices: readonly string[];
}

/**
 * Reads the levels that certificates give (`--refs`): unit, frequency, level, and a standard uncertainty `u_db` or an
 * expanded one with its coverage factor (`expanded_db` and `k`). Optional: role (blank for both) and mount. 0 dB is a
 * level here. Columns that are not known are left out, with a notice.
 * @throws InputError with every fault: no row of a certificate is left out.
 */
export async function readReferences(source: Source): Promise<ReferencesRead> {
  const { entries, file, notices } = await readEntries(source, {
    rules: REFERENCE_COLUMNS,
    required: ['unit', 'frequency', 'level'],
    numeric: ['frequency', 'level', 'uncertainty', 'expanded', 'k'],
    decibels: ['level', 'uncertainty', 'expanded'],
    example: EXAMPLE,
    layout: 'references',
    checkHeader: uncertaintyFaults,
    entry: entryOf,
  });
  const references = spectraOf(source.name, entries).map(({ key, ...spectrum }) => ({ ...key, ...spectrum }));
  return { references, file, notices };
}

function uncertaintyFaults(header: TableHeader<ReferenceColumn>): InputFault[] {
  const has = (name: ReferenceColumn) => header.known.has(name);
  if (has('uncertainty') || (has('expanded') && has('k'))) return [];
  const place = { file: header.file, line: header.line };
  if (!has('expanded')) {
    return [{ place, found: 'no uncertainty', expected: EXAMPLE, remedy: 'Add `u_db`, or `expanded_db` and `k`.' }];
  }
  const column = header.known.get('expanded')!.header;
  return [
    {
      place: { ...place, column },
      found: `\`${column}\`, but k missing`,
      expected: 'the coverage factor k that the certificate states beside its expanded uncertainty',
      remedy: 'Add a column `k`, or give the standard uncertainty as `u_db`.',
    },
  ];
}

function entryOf(row: EntryRow<ReferenceColumn>) {
  const unit = row.text('unit');
  const role = ROLES.get(row.text('role').toLowerCase());
  if (unit === '') row.fault('unit', 'a blank', 'the name of a unit', 'Name the unit.');
  if (role === undefined) {
    row.fault('role', `\`${row.text('role')}\``, 'emit, receive, both or a blank', 'Correct the role.');
  }
  const value = frequencyAndLevel(row);
  const uncertainty = standardUncertainty(row);
  if (unit === '' || role === undefined || value === undefined || uncertainty === undefined) return undefined;
  return { key: { unit, mount: row.text('mount'), role }, value: { line: row.line, ...value, uncertainty } };
}

/** u, or U / k (JCGM 100:2008, 4.3.3). Undefined after a fault. */
function standardUncertainty(row: EntryRow<ReferenceColumn>): number | undefined {
  const [standard, expanded] = [row.text('uncertainty'), row.text('expanded')];
  if (standard !== '' && expanded !== '') {
    row.fault('expanded', 'a standard and an expanded uncertainty in one row', 'one of them', 'Leave one blank.');
    return undefined;
  }
  if (standard === '' && expanded === '') {
    row.fault('uncertainty', 'no uncertainty', 'u_db, or expanded_db with k', 'Fill in what the certificate states.');
    return undefined;
  }
  if (expanded !== '' && row.text('k') === '') {
    row.fault('k', 'k missing', 'the coverage factor beside expanded_db', 'Fill in the k that the certificate states.');
    return undefined;
  }
  const factor = expanded === '' ? 1 : row.number('k');
  const given = row.number(expanded === '' ? 'uncertainty' : 'expanded');
  if (factor === undefined || given === undefined) return undefined;
  if (!(factor > 0)) row.fault('k', `\`${row.text('k')}\``, 'a coverage factor above 0', 'Correct k.');
  // Without a factor that can be used, the uncertainty is judged by itself.
  const uncertainty = factor > 0 ? given / factor : given;
  const trouble = uncertaintyTrouble(uncertainty);
  if (trouble !== '') {
    row.fault(
      expanded === '' ? 'uncertainty' : 'expanded',
      `\`${standard}${expanded}\`: ${trouble}`,
      'an uncertainty above 0',
      'Correct the uncertainty; a certificate without one fixes nothing.',
    );
  }
  return factor > 0 && trouble === '' ? uncertainty : undefined;
}
