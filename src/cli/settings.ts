import { DEFAULT_RISK, DEFAULT_TOLERANCE } from '../findings/thresholds.ts';
import { parseRange } from '../quantity/frequency.ts';
import { UNCERTAINTY_RANGE, uncertaintyTrouble } from '../readings/physical-limits.ts';
import { parseGrid } from './grid-text.ts';

/**
 * Everything that shapes a result, by the long names of the options. It is written to `summary.json`, and `--settings`
 * reads it back. `null` means 'not given'.
 */
export interface Settings {
  /** Input files as the user named them, relative to the folder the program was started in. */
  readonly files: readonly string[];
  readonly model: 'auto' | 'reciprocal' | 'directional';
  readonly datum: 'strict' | 'balanced';
  readonly reversible: readonly string[];
  readonly refs: string | null;
  /** `free`, `none`, or the name of a file. */
  readonly path: string;
  readonly lookalikes: readonly (readonly string[])[];
  readonly 'loose-gain': boolean;
  readonly level: string | null;
  /** Decibels. */
  readonly u: number | null;
  readonly band: string | null;
  readonly grid: string;
  readonly coverage: number;
  /** File of systematic effects. */
  readonly budget: string | null;
  /** Draws of a Monte Carlo check; none where it is not asked for. */
  readonly 'monte-carlo': number | null;
  /** Seed of all draws. */
  readonly seed: number;
  /** Effect of a partner in dB that does not matter. */
  readonly tolerance: number;
  /** Chance that a clean set gets any take flagged. */
  readonly risk: number;
}

/** Fewer draws tell no interval of 95 %; more take hours. Common practice, no source. */
const DRAWS = { least: 1000, most: 10_000_000 } as const;

export const DEFAULT_SETTINGS: Settings = {
  files: [],
  model: 'auto',
  datum: 'strict',
  reversible: [],
  refs: null,
  path: 'free',
  lookalikes: [],
  'loose-gain': false,
  level: null,
  u: null,
  band: null,
  grid: 'as-measured',
  coverage: 0.95,
  budget: null,
  'monte-carlo': null,
  seed: 1,
  tolerance: DEFAULT_TOLERANCE,
  risk: DEFAULT_RISK,
};

/** What a setting may be. `read` takes the option's text as well as the value in a settings file; undefined: cannot be used. */
interface Rule<Value> {
  readonly expected: string;
  readonly example: string;
  readonly read: (value: unknown) => Value | undefined;
}

const RULES: { readonly [Name in keyof Settings]: Rule<Settings[Name]> } = {
  files: { expected: 'names of files', example: 'bench.csv', read: names },
  model: oneOf(['auto', 'reciprocal', 'directional']),
  datum: oneOf(['strict', 'balanced']),
  reversible: { expected: 'units, with commas between them', example: 'T1,T2', read: names },
  refs: { expected: 'the name of a CSV file', example: 'certificate.csv', read: orNull(name) },
  path: { expected: 'free, none, or the name of a CSV file', example: 'block.csv', read: name },
  lookalikes: {
    expected: 'two units or more, with = between them, each unit in one group only',
    example: 'A1=A2',
    read: groups,
  },
  'loose-gain': {
    expected: 'true or false',
    example: 'true',
    read: (value) => (typeof value === 'boolean' ? value : undefined),
  },
  level: {
    expected: 'a formula of numeric columns',
    example: "'20*log10(out_mv/in_mv) - gain_db'",
    read: orNull(name),
  },
  u: {
    expected: `a standard uncertainty from ${UNCERTAINTY_RANGE.least} to ${UNCERTAINTY_RANGE.most} dB`,
    example: '0.3',
    read: orNull((value) => number(value, (u) => uncertaintyTrouble(u) === '')),
  },
  band: {
    expected: 'two frequencies with their units, the lower first',
    example: "'2 kHz..80 kHz'",
    read: orNull((value) => (typeof value === 'string' && parseRange(value) !== undefined ? value : undefined)),
  },
  grid: {
    expected: '1/3, 1/6, 1/12, 1/24, as-measured, or DECADE/N with N points in each decade',
    example: 'DECADE/50',
    read: (value) => (typeof value === 'string' && parseGrid(value) !== undefined ? value : undefined),
  },
  coverage: {
    expected: 'a probability above 0 and below 1',
    example: '0.95',
    read: (value) => number(value, (p) => p > 0 && p < 1),
  },
  'monte-carlo': {
    expected: `a whole number of draws from ${DRAWS.least} to ${DRAWS.most}`,
    example: '10000',
    read: orNull((value) => number(value, (n) => Number.isInteger(n) && n >= DRAWS.least && n <= DRAWS.most)),
  },
  seed: {
    expected: 'a whole number',
    example: '1',
    read: (value) => number(value, (n) => Number.isSafeInteger(n) && n < 2 ** 31),
  },
  budget: { expected: 'the name of a CSV file', example: 'budget.csv', read: orNull(name) },
  tolerance: {
    expected: 'an effect in dB, above 0',
    example: '1',
    read: (value) => number(value, (effect) => effect > 0),
  },
  risk: {
    expected: 'a probability above 0 and below 0.5',
    example: '0.05',
    read: (value) => number(value, (p) => p > 0 && p < 0.5),
  },
};

/** One setting that cannot be used. */
export interface SettingTrouble {
  readonly name: string;
  readonly found: string;
  readonly expected: string;
  readonly example: string;
}

/**
 * Checks settings from the command line or from a file; those that are absent stay absent.
 * A name that is no setting is a trouble as well: it would be left out in silence otherwise.
 */
export function checkSettings(values: Readonly<Record<string, unknown>>): {
  readonly accepted: Partial<Settings>;
  readonly troubles: readonly SettingTrouble[];
} {
  const accepted: Record<string, unknown> = {};
  const troubles: SettingTrouble[] = [];
  for (const [key, value] of Object.entries(values)) {
    if (value === undefined) continue;
    if (!Object.hasOwn(RULES, key)) {
      const known = Object.keys(RULES).join(', ');
      troubles.push({ name: key, found: 'a setting that is not known', expected: `one of ${known}`, example: 'model' });
      continue;
    }
    const rule: Rule<unknown> = RULES[key as keyof Settings];
    const read = rule.read(value);
    if (read !== undefined) accepted[key] = read;
    else troubles.push({ name: key, found: JSON.stringify(value), expected: rule.expected, example: rule.example });
  }
  // Every value in it has passed the rule of its own name.
  return { accepted: accepted as Partial<Settings>, troubles };
}

function oneOf<Word extends string>(words: readonly [Word, ...Word[]]): Rule<Word> {
  return {
    expected: `${words.slice(0, -1).join(', ')} or ${words.at(-1)}`,
    example: words[0],
    read: (value) => words.find((word) => word === value),
  };
}

function orNull<Value>(read: (value: unknown) => Value | undefined): (value: unknown) => Value | null | undefined {
  return (value) => (value === null ? null : read(value));
}

// Text that starts with -- is an option that slipped into the place of a value.
function name(value: unknown): string | undefined {
  return typeof value === 'string' && value.trim() !== '' && !value.startsWith('--') ? value : undefined;
}

function names(value: unknown): string[] | undefined {
  const list = typeof value === 'string' ? value.split(',').map((text) => text.trim()) : value;
  if (!Array.isArray(list)) return undefined;
  const read = list.map((item: unknown) => (typeof item === 'string' && item.trim() !== '' ? item : undefined));
  return read.every((item) => item !== undefined) ? read : undefined;
}

function groups(value: unknown): string[][] | undefined {
  if (!Array.isArray(value)) return undefined;
  const read = value.map((group: unknown) =>
    names(typeof group === 'string' ? group.split('=').map((text) => text.trim()) : group),
  );
  if (!read.every((group) => group !== undefined && group.length > 1)) return undefined;
  const units = read.flat();
  return new Set(units).size === units.length ? (read as string[][]) : undefined;
}

function number(value: unknown, isFit: (value: number) => boolean): number | undefined {
  const text = typeof value === 'string' ? value.trim() : undefined;
  if (text !== undefined && !/^(\d+\.?\d*|\.\d+)(e[+-]?\d+)?$/i.test(text)) return undefined;
  const read = text === undefined ? value : Number(text);
  return typeof read === 'number' && Number.isFinite(read) && isFit(read) ? read : undefined;
}
