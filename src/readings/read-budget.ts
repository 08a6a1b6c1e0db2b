import { hertzPerUnit } from '../quantity/frequency.ts';
import { InputError, type InputFault } from '../quantity/input-fault.ts';
import type { BudgetLine, BudgetTarget, Distribution } from './budget-lines.ts';
import type { ColumnRule } from './column-vocabulary.ts';
import { uncertaintyTrouble } from './physical-limits.ts';
import { type EntryRow, readEntries } from './read-entries.ts';
import type { InputFile } from './readings.ts';
import type { Source } from './source.ts';

const EXAMPLE =
  'a header line `name,u_db,applies_to` and below it rows such as `analyser,0.05,all`; or `half_width_db,distribution` in place of `u_db`';

type BudgetColumn =
  | 'name'
  | 'uncertainty'
  | 'halfWidth'
  | 'distribution'
  | 'k'
  | 'dof'
  | 'type'
  | 'appliesTo'
  | 'from'
  | 'to';

const decibels = (unit: string) => (/^db$/.test(unit) ? 1 : undefined);
const pure = (unit: string) => (unit === '' || unit === '1' ? 1 : undefined);

/** Columns of a budget (`--budget`). */
const BUDGET_COLUMNS: readonly ColumnRule<BudgetColumn>[] = [
  { name: 'name', title: 'name', word: 'name' },
  { name: 'uncertainty', title: 'u_db', word: 'u', unit: decibels },
  { name: 'halfWidth', title: 'half_width_db', word: 'halfwidth', unit: decibels },
  { name: 'distribution', title: 'distribution', word: 'distribution' },
  { name: 'k', title: 'k', word: 'k', unit: pure },
  { name: 'dof', title: 'dof', word: 'dof', unit: pure },
  { name: 'type', title: 'type', word: 'type' },
  { name: 'appliesTo', title: 'applies_to', word: 'appliesto' },
  { name: 'from', title: 'from_hz', word: 'from', unit: hertzPerUnit },
  { name: 'to', title: 'to_hz', word: 'to', unit: hertzPerUnit },
  { name: 'from', title: 'band_from_hz', word: 'bandfrom', unit: hertzPerUnit },
  { name: 'to', title: 'band_to_hz', word: 'bandto', unit: hertzPerUnit },
];

/**
 * Half-width over standard uncertainty. Sources: rectangular JCGM 100:2008, 4.3.7; triangular 4.3.9; u-shaped (arcsine)
 * JCGM 101:2008, 6.4.6. For a normal distribution it is the coverage factor that comes with the half-width.
 */
const DIVISORS: ReadonlyMap<Distribution, number> = new Map([
  ['rectangular', Math.sqrt(3)],
  ['triangular', Math.sqrt(6)],
  ['u-shaped', Math.SQRT2],
]);
const DISTRIBUTIONS: readonly Distribution[] = ['normal', 'rectangular', 'triangular', 'u-shaped'];

/** Coverage factor of a normal half-width that names none: JCGM 100:2008, 6.3.3 and G.6.6 (about 95 %). */
const USUAL_FACTOR = 2;

/** The lines of a budget, with its file and what is worth saying about it. */
export interface BudgetRead {
  readonly lines: readonly BudgetLine[];
  readonly file: InputFile;
  readonly notices: readonly string[];
}

/**
 * Reads the systematic effects of a budget (`--budget CSV`): name, `u_db` or `half_width_db` with its distribution, and
 * optionally degrees of freedom, type (A or B; where blank, A with finite degrees of freedom and B without), what it
 * applies to (`all` where blank) and a frequency range.
 * @throws InputError with every fault: no line is left out.
 */
export async function readBudget(source: Source): Promise<BudgetRead> {
  const assumed: string[] = [];
  const { entries, file, notices } = await readEntries(source, {
    rules: BUDGET_COLUMNS,
    required: ['name'],
    numeric: ['uncertainty', 'halfWidth', 'k', 'dof', 'from', 'to'],
    decibels: ['uncertainty', 'halfWidth'],
    example: EXAMPLE,
    layout: 'budget',
    entry: (row: EntryRow<BudgetColumn>) => lineOf(row, source.name, assumed),
  });
  const faults = overlapFaults(source.name, entries);
  if (faults.length > 0) throw new InputError(faults);
  const ofFactor =
    assumed.length === 0
      ? []
      : [`${source.name}: a normal half-width without k counts as ${USUAL_FACTOR} u: ${assumed.join(', ')}.`];
  return { lines: entries, file, notices: [...notices, ...ofFactor] };
}

function lineOf(row: EntryRow<BudgetColumn>, file: string, assumed: string[]): BudgetLine | undefined {
  const name = row.text('name');
  if (name === '') row.fault('name', 'a blank', 'the name of an effect', 'Name what the line stands for.');
  const found = standardUncertainty(row, name, assumed);
  const dof = degreesOfFreedom(row);
  const type = typeOf(row, dof);
  const target = targetOf(row);
  const range = rangeOf(row);
  if (name === '' || found === undefined || type === undefined || target === undefined || range === undefined) {
    return undefined;
  }
  return { name, place: { file, line: row.line }, ...found, dof, type, ...target, ...range };
}

function standardUncertainty(row: EntryRow<BudgetColumn>, name: string, assumed: string[]) {
  const word = row
    .text('distribution')
    .toLowerCase()
    .replace(/[\s_]+/g, '-');
  const distribution =
    word === '' ? undefined : DISTRIBUTIONS.find((known) => known === (word === 'u' ? 'u-shaped' : word));
  if (word !== '' && distribution === undefined) {
    row.fault('distribution', `\`${row.text('distribution')}\``, DISTRIBUTIONS.join(', '), 'Name one of these.');
    return undefined;
  }
  const isWidth = row.text('halfWidth') !== '';
  if (isWidth === (row.text('uncertainty') !== '')) {
    row.fault(
      isWidth ? 'halfWidth' : 'uncertainty',
      isWidth ? 'a standard uncertainty and a half-width in one row' : 'no uncertainty',
      '`u_db`, or `half_width_db` with its distribution',
      isWidth ? 'Leave one of them blank.' : 'Fill in one of them.',
    );
    return undefined;
  }
  const column = isWidth ? 'halfWidth' : 'uncertainty';
  const given = row.number(column);
  if (given === undefined) return undefined;
  if (isWidth && distribution === undefined) {
    row.fault('distribution', 'a half-width without its distribution', DISTRIBUTIONS.join(', '), 'Name one of these.');
    return undefined;
  }
  let divisor = isWidth ? DIVISORS.get(distribution!) : 1;
  if (divisor === undefined) {
    divisor = row.text('k') === '' ? USUAL_FACTOR : row.number('k');
    if (row.text('k') === '') assumed.push(name);
    if (divisor === undefined) return undefined;
    if (!(divisor > 0)) {
      row.fault('k', `\`${row.text('k')}\``, 'a coverage factor above 0', 'Correct k.');
      return undefined;
    }
  }
  const uncertainty = given / divisor;
  const trouble = uncertaintyTrouble(uncertainty);
  if (trouble === '') return { uncertainty, distribution: distribution ?? 'normal' };
  row.fault(
    column,
    `\`${row.text(column)}\`: ${trouble}`,
    'an uncertainty above 0',
    'Correct it, or take the line out.',
  );
  return undefined;
}

function degreesOfFreedom(row: EntryRow<BudgetColumn>): number {
  if (/^(inf|infinity|∞|)$/i.test(row.text('dof'))) return Number.POSITIVE_INFINITY;
  const dof = row.number('dof');
  if (dof !== undefined && !(dof > 0)) {
    row.fault(
      'dof',
      `\`${row.text('dof')}\` degrees of freedom`,
      'a number above 0, or a blank where the uncertainty counts as known',
      'Correct the degrees of freedom.',
    );
  }
  return dof ?? Number.POSITIVE_INFINITY;
}

function typeOf(row: EntryRow<BudgetColumn>, dof: number): 'A' | 'B' | undefined {
  const word = row.text('type').toUpperCase();
  if (word === '') return Number.isFinite(dof) ? 'A' : 'B';
  if (word === 'A' || word === 'B') return word;
  row.fault('type', `\`${row.text('type')}\``, 'A, B or a blank', 'Correct the type of evaluation.');
  return undefined;
}

const TARGETS = 'all, emitter, receiver, session, path or unit, the last five with or without a name behind it';

function targetOf(row: EntryRow<BudgetColumn>): { readonly target: BudgetTarget; readonly label: string } | undefined {
  const text = row.text('appliesTo');
  if (text === '') return { target: 'all', label: '' };
  const match = /^(all|emitter|receiver|session|path|unit)(?:\s+(.+))?$/i.exec(text);
  const target = match?.[1]?.toLowerCase() as BudgetTarget | undefined;
  const label = match?.[2] ?? '';
  if (target !== undefined && !(target === 'all' && label !== '')) return { target, label };
  row.fault('appliesTo', `\`${text}\``, TARGETS, 'Say what the effect applies to, such as `unit T03`.');
  return undefined;
}

function rangeOf(row: EntryRow<BudgetColumn>): { readonly from: number; readonly to: number } | undefined {
  const end = (name: 'from' | 'to', open: number) => (row.text(name) === '' ? open : row.number(name));
  const from = end('from', 0);
  const to = end('to', Number.POSITIVE_INFINITY);
  if (from === undefined || to === undefined) return undefined;
  if (from >= 0 && from < to) return { from, to };
  row.fault(
    'from',
    `a frequency range from ${row.text('from') || 'nothing'} to ${row.text('to') || 'nothing'}`,
    'the lower end first, or a blank for an open end',
    'Correct the range.',
  );
  return undefined;
}

/** An effect of one name that reaches a take twice at one frequency would count twice. */
function overlapFaults(file: string, lines: readonly BudgetLine[]): InputFault[] {
  return lines.flatMap((line, i) => {
    const before = lines.slice(0, i).find((other) => other.name === line.name && overlaps(line, other));
    if (before === undefined) return [];
    return [
      {
        place: { file, line: line.place.line! },
        found: `${line.name} a second time, with a frequency range that overlaps that of line ${before.place.line}`,
        expected: 'ranges of one effect that do not overlap, or different sessions, paths or units',
        remedy: 'Part the ranges, or give the two effects different names.',
      },
    ];
  });
}

function overlaps(a: BudgetLine, b: BudgetLine): boolean {
  if (!(a.from < b.to && b.from < a.to)) return false;
  return !(a.target === b.target && a.label !== '' && b.label !== '' && a.label !== b.label);
}
