import { rename, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { compareResponses } from '../findings/compare-responses.ts';
import { matchResponses } from '../findings/match-responses.ts';
import { type FrequencyRange, parseRange } from '../quantity/frequency.ts';
import { InputError } from '../quantity/input-fault.ts';
import { readResult } from '../readings/read-result.ts';
import type { SavedResult } from '../readings/saved-result.ts';
import { differencesTable, differencesText, matchesTable, matchesText, savedName } from '../report/compare-tables.ts';
import { placedUnit } from '../report/response-name.ts';
import type { OutputFile } from '../report/result.ts';
import { EXIT } from './exit-codes.ts';
import { fileSource } from './file-source.ts';
import { systemFault } from './system-fault.ts';
import { textStyle, writeMessage, writeResult } from './terminal.ts';
import { UsageError } from './usage-error.ts';

/** What is to be compared: units with each other, or all of them for sets that match. */
export interface CompareRequest {
  /** Folder of the result. */
  readonly result: string;
  readonly units: readonly string[];
  readonly match: { readonly size: number; readonly within: number } | undefined;
  readonly band: FrequencyRange | undefined;
  readonly seed: number;
  readonly quiet: boolean;
}

/** @throws UsageError with everything that cannot be understood. */
export function readCompareRequest(
  result: string,
  units: readonly string[],
  values: Readonly<Record<string, unknown>>,
): CompareRequest {
  const said: string[] = [];
  const say = (name: string, found: unknown, expected: string, example: string) => {
    said.push(`${name}: found ${JSON.stringify(found)}; expected ${expected}. Example: ${name} ${example}`);
  };
  const number = (name: string, isFit: (value: number) => boolean, expected: string, example: string) => {
    const typed = values[name];
    if (typed === undefined) return undefined;
    const value = typeof typed === 'string' && /^(\d+\.?\d*|\.\d+)$/.test(typed.trim()) ? Number(typed) : Number.NaN;
    if (isFit(value)) return value;
    say(`--${name}`, typed, expected, example);
    return undefined;
  };
  const size = number('match', (n) => Number.isInteger(n) && n >= 2 && n <= 12, 'a whole number from 2 to 12', '2');
  const within = number('within', (db) => db > 0, 'a tolerance in dB, above 0', '0.5');
  const seed = number('seed', Number.isSafeInteger, 'a whole number', '1') ?? 1;
  const band = typeof values.band === 'string' ? parseRange(values.band) : undefined;
  if (values.band !== undefined && band === undefined) {
    say('--band', values.band, 'two frequencies with their units, the lower first', "'2 kHz..80 kHz'");
  }
  if ((values.match === undefined) !== (values.within === undefined)) {
    const [given, missing] = values.match === undefined ? ['--within', '--match'] : ['--match', '--within'];
    said.push(`${missing}: found ${given} without it. Example: --match 2 --within 0.5`);
  }
  if (values.match === undefined && units.length < 2) {
    said.push(`UNIT: found ${units.length}; expected two units or more. Example: oddloop compare result N01 N02`);
  }
  if (said.length > 0) throw new UsageError(said);
  const match = size === undefined || within === undefined ? undefined : { size, within };
  return { result, units, match, band, seed, quiet: values.quiet === true };
}

/** Compares responses of a result with each other; writes `differences.csv` or `matches.csv` into its folder. */
export async function compareCommand(request: CompareRequest): Promise<number> {
  const source = (name: string) => fileSource(join(request.result, name));
  const [responses, covariance, summary] = await Promise.all([
    source('responses.csv'),
    source('covariance.json'),
    source('summary.json'),
  ]);
  const result = await readResult({ responses, covariance, summary });
  const { file, text } = request.match === undefined ? differences(result, request) : matches(result, request);
  await writeBeside(request.result, file);
  if (!request.quiet) await writeResult(text);
  writeMessage(`Written to ${join(request.result, file.name)}.`);
  return EXIT.done;
}

interface Answer {
  readonly file: OutputFile;
  readonly text: string;
}

function differences(result: SavedResult, { units, band }: CompareRequest): Answer {
  const chosen = units.map((unit) => responsesOf(result, unit));
  const limited = limitedTo(result, band);
  const pairs = chosen.flatMap((of, i) =>
    chosen.slice(i + 1).flatMap((others) =>
      of.flatMap((first) => {
        const { role } = result.responses[first]!;
        const second = others.find((other) => result.responses[other]!.role === role);
        if (second === undefined || second === first) return [];
        const pair = compareResponses(result, first, second);
        return [{ ...pair, differences: pair.differences.filter(({ frequency }) => limited.includes(frequency)) }];
      }),
    ),
  );
  if (pairs.length === 0) {
    throw unusable(units.join(', '), 'two different units that have a role in common');
  }
  return { file: differencesTable(result, pairs), text: differencesText(result, pairs, textStyle(process.stdout)) };
}

function matches(result: SavedResult, { match, units, band, seed }: CompareRequest): Answer {
  const members = units.flatMap((unit) => responsesOf(result, unit));
  const pool = units.length === 0 ? [...result.responses.keys()] : members;
  const options = { ...match!, pool, frequencies: limitedTo(result, band), seed };
  const found = matchResponses(result, options);
  return {
    file: matchesTable(result, found),
    text: matchesText(result, found, match!, textStyle(process.stdout)),
  };
}

/** Responses that a name means: `N01`, `N01@clamped`, `N01 emit`; the last two where the first means several. */
function responsesOf({ responses }: SavedResult, text: string): number[] {
  const found = [...responses.keys()].filter((r) =>
    [responses[r]!.unit, placedUnit(responses[r]!), savedName(responses[r]!)].includes(text),
  );
  const mounts = new Set(found.map((r) => responses[r]!.mount));
  if (found.length === 0) throw unusable(text, `one of ${[...new Set(responses.map(placedUnit))].join(', ')}`);
  if (mounts.size > 1) {
    throw unusable(`${text}, which has several mounts`, found.map((r) => savedName(responses[r]!)).join(', '));
  }
  return found;
}

function limitedTo({ frequencies }: SavedResult, band: FrequencyRange | undefined): number[] {
  const all = [...frequencies.keys()];
  if (band === undefined) return all;
  // 16.1 kHz is 16100.000000000002 Hz: the ends are included as a reader understands them.
  const inside = all.filter(
    (f) => frequencies[f]! >= band.from * (1 - 1e-9) && frequencies[f]! <= band.to * (1 + 1e-9),
  );
  if (inside.length > 0) return inside;
  throw new InputError([
    {
      place: { file: '--band' },
      found: 'a range that holds no frequency of the result',
      expected: `frequencies from ${frequencies[0]} Hz to ${frequencies.at(-1)} Hz`,
      remedy: 'Choose a range that the result reaches.',
    },
  ]);
}

function unusable(found: string, expected: string): InputError {
  return new InputError([{ place: { file: 'UNIT' }, found, expected, remedy: 'Use the names in responses.csv.' }]);
}

/** Puts one more file into the folder of a result, whole or not at all. */
async function writeBeside(folder: string, { name, chunks }: OutputFile): Promise<void> {
  const path = join(folder, name);
  const temporary = `${path}.${process.pid}.part`;
  try {
    await writeFile(temporary, chunks());
    await rename(temporary, path);
  } catch (error) {
    throw systemFault(path, error, {
      expected: 'a folder that can be written',
      remedy: 'Free it, and run this again.',
    });
  }
}
