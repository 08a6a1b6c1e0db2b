import type { Command } from 'commander';
import { checkSettings, type Settings } from './settings.ts';
import { UsageError } from './usage-error.ts';

/** What the command line asks for. */
export interface Request {
  /** Settings named on the command line only; they win over those of `settingsFile`. */
  readonly given: Partial<Settings>;
  readonly settingsFile: string | undefined;
  /** Output folder; absent for a command that writes nothing. */
  readonly out: string | undefined;
  readonly json: boolean;
  /** Whether a flagged take changes the exit code. */
  readonly strict: boolean;
  readonly quiet: boolean;
}

/** Adds the options that shape a result, the same for every command that reads files. */
export function addShapingOptions(command: Command): Command {
  return command
    .argument('[FILE...]', 'CSV files of pair measurements; names with a leading dash after --')
    .option('--model <KIND>', 'reciprocal, directional or auto (default: auto)')
    .option('--datum <RULE>', 'strict or balanced: what fixes a reciprocal part without an odd loop (default: strict)')
    .option('--reversible <UNIT,…>', 'units for which emit = receive, within the directional model', collect)
    .option('--refs <CSV>', 'certificates: unit, role, frequency, level_db, and u_db or expanded_db with k')
    .option('--path <CSV|free|none>', 'levels of paths; free: unknown each; none: labels ignored (default: free)')
    .option('--lookalikes <A=B>', 'units that share one response; may be repeated', collect)
    .option('--loose-gain', 'the gain of each session is unknown')
    .option('--level <EXPR>', "formula of a level in dB, such as '20*log10(out_mv/in_mv) - gain_db'")
    .option('--u <DB>', 'standard uncertainty of a reading, where the files tell none')
    .option('--band <LO..HI>', "use these frequencies only, such as '2 kHz..80 kHz'")
    .option('--grid <GRID>', '1/3, 1/6, 1/12, 1/24, as-measured or DECADE/N (default: as-measured)')
    .option('--coverage <P>', 'coverage probability of expanded uncertainties (default: 0.95)')
    .option('--budget <CSV>', 'systematic effects: name, u_db or half_width_db with distribution, applies_to, …')
    .option('--monte-carlo <N>', 'check the uncertainties with N draws through the whole solution')
    .option('--seed <N>', 'seed of the draws (default: 1)')
    .option('--tolerance <DB>', 'effect of a partner that does not matter (default: 1)')
    .option('--risk <P>', 'chance that a set with nothing wrong gets a take flagged (default: 0.05)')
    .option('--settings <JSON>', 'repeat the run of a summary.json; options named here win')
    .option('--json', 'print JSON instead of text');
}

function collect(value: string, before: readonly string[] | undefined): readonly string[] {
  return [...(before ?? []), value];
}

/** Names of the options whose text is a setting. */
const SHAPING = [
  'model',
  'datum',
  'reversible',
  'refs',
  'path',
  'lookalikes',
  'level',
  'u',
  'band',
  'grid',
  'coverage',
  'budget',
  'seed',
  'tolerance',
  'risk',
] as const;

/**
 * Checks what was typed.
 * @param values as the command parser gives them: text, lists of text, true, or undefined.
 * @param writes whether the command needs a folder to write to.
 * @throws UsageError with everything that cannot be understood.
 */
export function readRequest(
  files: readonly string[],
  values: Readonly<Record<string, unknown>>,
  { writes, name }: { readonly writes: boolean; readonly name: string },
): Request {
  const typed: Record<string, unknown> = { 'loose-gain': values.looseGain, 'monte-carlo': values.monteCarlo };
  for (const option of SHAPING) typed[option] = values[option];
  if (Array.isArray(typed.reversible)) typed.reversible = typed.reversible.join(',');
  const { accepted, troubles } = checkSettings(typed);
  const said = troubles.map(
    (trouble) =>
      `--${trouble.name}: found ${trouble.found}; expected ${trouble.expected}. Example: --${trouble.name} ${trouble.example}`,
  );
  const settingsFile = fileOption('settings', values.settings, 'result/summary.json', said);
  const out = fileOption('out', values.out, 'result', said);
  if (writes && values.out === undefined) {
    said.push(
      '--out: found no folder to write to; expected one that is new, or an earlier result. Example: --out result',
    );
  }
  for (const file of files)
    if (file.trim() === '') said.push(`FILE: found ${JSON.stringify(file)}; expected a file name.`);
  if (files.length === 0 && values.settings === undefined) {
    said.push(`FILE: found no input file; expected at least one. Example: oddloop ${name} bench.csv`);
  }
  if (said.length > 0) throw new UsageError(said);
  return {
    given: files.length > 0 ? { ...accepted, files } : accepted,
    settingsFile,
    out,
    json: values.json === true,
    strict: values.strict === true,
    quiet: values.quiet === true,
  };
}

function fileOption(name: string, value: unknown, example: string, said: string[]): string | undefined {
  if (typeof value !== 'string') return undefined;
  if (value.trim() !== '' && !value.startsWith('--')) return value;
  said.push(`--${name}: found ${JSON.stringify(value)}; expected a name. Example: --${name} ${example}`);
  return undefined;
}
