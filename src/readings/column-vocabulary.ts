import { hertzPerUnit } from '../quantity/frequency.ts';

/** A column that a kind of table knows. Two headers that mean the same `name` are a fault. */
export interface ColumnRule<Name extends string> {
  readonly name: Name;
  /** The header as the documentation writes it. */
  readonly title: string;
  /** The header without its unit, in lower case, without blanks, `-`, `_` and `.`. */
  readonly word: string;
  /** Factor from a unit to the one that the program works in; undefined for a unit that the column cannot have. Absent for text. */
  readonly unit?: (unit: string) => number | undefined;
  /** The unit that is taken, with a notice, where a header names none; absent where nobody can tell. */
  readonly assumed?: string;
  /** The value is a linear amplitude ratio instead of a level. */
  readonly linear?: true;
}

/** What a header means. */
export type Meaning<Name extends string> =
  | {
      readonly kind: 'known';
      readonly rule: ColumnRule<Name>;
      readonly factor: number;
      readonly assumed: string | undefined;
    }
  | { readonly kind: 'unit missing' | 'unit unknown'; readonly rule: ColumnRule<Name> };

const METRES_PER_UNIT: ReadonlyMap<string, number> = new Map([
  ['m', 1],
  ['cm', 1e-2],
  ['mm', 1e-3],
  ['km', 1e3],
]);

/** `dB`, also with a reference as in `dB re 1 V/A`. */
const decibels = (unit: string) => (/^db(?:re.*)?$/.test(unit) ? 1 : undefined);
const metres = (unit: string) => METRES_PER_UNIT.get(unit);
/** No unit, or one over itself, such as `V/V`. */
const pure = (unit: string) => (/^(?:|-|1|(.+)\/\1)$/.test(unit) ? 1 : undefined);

export type ReadingColumn =
  | 'emitter'
  | 'receiver'
  | 'frequency'
  | 'level'
  | 'uncertainty'
  | 'session'
  | 'path'
  | 'emitterMount'
  | 'receiverMount'
  | 'emitterSeating'
  | 'receiverSeating'
  | 'repeat'
  | 'averages'
  | 'coherence'
  | 'noise'
  | 'gain'
  | 'distance'
  | 'takenAt'
  | 'note'
  | 'file';

const FREQUENCY = {
  name: 'frequency',
  title: 'frequency_hz',
  word: 'frequency',
  unit: hertzPerUnit,
  assumed: 'Hz',
} as const;
const LEVEL = { name: 'level', title: 'level_db', word: 'level', unit: decibels, assumed: 'dB' } as const;
const UNCERTAINTY = { name: 'uncertainty', title: 'u_db', word: 'u', unit: decibels } as const;

/** Columns of pair measurements: of the long layout, the bench log and the files that it names. */
export const READING_COLUMNS: readonly ColumnRule<ReadingColumn>[] = [
  { name: 'emitter', title: 'emitter', word: 'emitter' },
  { name: 'receiver', title: 'receiver', word: 'receiver' },
  FREQUENCY,
  LEVEL,
  { name: 'level', title: 'ratio', word: 'ratio', unit: pure, linear: true },
  UNCERTAINTY,
  { name: 'session', title: 'session', word: 'session' },
  { name: 'path', title: 'path', word: 'path' },
  { name: 'emitterMount', title: 'emitter_mount', word: 'emittermount' },
  { name: 'receiverMount', title: 'receiver_mount', word: 'receivermount' },
  { name: 'emitterSeating', title: 'emitter_seating', word: 'emitterseating' },
  { name: 'receiverSeating', title: 'receiver_seating', word: 'receiverseating' },
  { name: 'repeat', title: 'repeat', word: 'repeat' },
  { name: 'averages', title: 'averages', word: 'averages', unit: pure },
  { name: 'coherence', title: 'coherence', word: 'coherence', unit: pure },
  { name: 'noise', title: 'noise_db', word: 'noise', unit: decibels },
  { name: 'gain', title: 'gain_db', word: 'gain', unit: decibels },
  { name: 'distance', title: 'distance_m', word: 'distance', unit: metres },
  { name: 'takenAt', title: 'taken_at', word: 'takenat' },
  { name: 'note', title: 'note', word: 'note' },
  { name: 'file', title: 'file', word: 'file' },
];

export type ReferenceColumn = 'unit' | 'mount' | 'role' | 'frequency' | 'level' | 'uncertainty' | 'expanded' | 'k';

/** Columns of a certificate (`--refs`). */
export const REFERENCE_COLUMNS: readonly ColumnRule<ReferenceColumn>[] = [
  { name: 'unit', title: 'unit', word: 'unit' },
  { name: 'mount', title: 'mount', word: 'mount' },
  { name: 'role', title: 'role', word: 'role' },
  FREQUENCY,
  LEVEL,
  UNCERTAINTY,
  { name: 'expanded', title: 'expanded_db', word: 'expanded', unit: decibels },
  { name: 'k', title: 'k', word: 'k', unit: pure },
];

export type PathLevelColumn = 'path' | 'frequency' | 'level' | 'uncertainty';

/** Columns of a table of path levels (`--path`). */
export const PATH_LEVEL_COLUMNS: readonly ColumnRule<PathLevelColumn>[] = [
  { name: 'path', title: 'path', word: 'path' },
  FREQUENCY,
  LEVEL,
  UNCERTAINTY,
];

/**
 * What a header means among `rules`; undefined for a header that they do not know.
 * Case, blanks, `-`, `_` and `.` do not matter. A unit follows the word (`frequency_khz`) or stands in brackets or
 * behind a stroke (`Frequency [kHz]`, `level / dB`); brackets behind a text column say nothing.
 */
export function meaningOf<Name extends string>(
  header: string,
  rules: readonly ColumnRule<Name>[],
): Meaning<Name> | undefined {
  const { word, unit } = headerParts(header);
  for (const rule of rules) {
    if (!word.startsWith(rule.word)) continue;
    const suffix = word.slice(rule.word.length);
    if (rule.unit === undefined) {
      if (suffix === '') return { kind: 'known', rule, factor: 1, assumed: undefined };
      continue;
    }
    if (suffix === '' && unit === '') return withoutUnit(rule);
    // A number without a unit has none behind its word either: `ratio_1` is a column of its own.
    if (suffix !== '' && rule.unit('') !== undefined) continue;
    const named = rule.unit(suffix === '' ? unit : suffix);
    // `unit` starts with `u`, but is no uncertainty: what follows the word must be a unit.
    if (named === undefined && suffix !== '') continue;
    if (named === undefined || (suffix !== '' && unit !== '' && rule.unit(unit) !== named)) {
      return { kind: 'unit unknown', rule };
    }
    return { kind: 'known', rule, factor: named, assumed: undefined };
  }
  return undefined;
}

function withoutUnit<Name extends string>(rule: ColumnRule<Name>): Meaning<Name> {
  const bare = rule.unit?.('');
  if (bare !== undefined) return { kind: 'known', rule, factor: bare, assumed: undefined };
  if (rule.assumed === undefined) return { kind: 'unit missing', rule };
  return { kind: 'known', rule, factor: rule.unit?.(rule.assumed.toLowerCase()) ?? 1, assumed: rule.assumed };
}

/** A header's word and unit, both in lower case and without blanks. */
export function headerParts(header: string): { readonly word: string; readonly unit: string } {
  const text = header.trim().toLowerCase();
  const match = /^(.*?)\s*(?:\[([^\]]*)\]|\(([^)]*)\)|\{([^}]*)\}|\/\s*([^/]+))$/.exec(text);
  const unit = match?.[2] ?? match?.[3] ?? match?.[4] ?? match?.[5] ?? '';
  return { word: (match?.[1] ?? text).replace(/[\s\-_.]+/g, ''), unit: unit.replace(/\s+/g, '') };
}

/** A header as a formula names it: lower case, everything but letters and digits as `_`: `Out [mV]` is `out_mv`. */
export function formulaName(header: string): string {
  const name = header
    .trim()
    .toLowerCase()
    .replace(/[^\p{L}\p{N}]+/gu, '_')
    .replace(/^_+|_+$/g, '');
  return /^\p{N}/u.test(name) ? `_${name}` : name;
}
