import { readFile } from 'node:fs/promises';
import { InputError, type InputFault } from '../quantity/input-fault.ts';
import { checkSettings, type Settings } from './settings.ts';
import { systemFault } from './system-fault.ts';

/** A run that is to be repeated. */
export interface EarlierRun {
  readonly settings: Partial<Settings>;
  /** SHA-256 of its input files by name; empty where the file is a bare list of settings. */
  readonly sha256: ReadonlyMap<string, string>;
}

const REMEDY = 'Name the summary.json of an earlier result, or a JSON file such as {"model": "reciprocal", "u": 0.3}.';

/**
 * Reads the settings of an earlier run from its `summary.json`, or from a JSON file with nothing but settings.
 * @throws InputError with every setting that cannot be used.
 */
export async function readSettingsFile(file: string): Promise<EarlierRun> {
  let text: string;
  try {
    text = await readFile(file, 'utf8');
  } catch (error) {
    throw systemFault(file, error, { expected: 'settings in JSON', remedy: REMEDY });
  }
  const record = parsedRecord(file, text);
  const isSummary = typeof record.schema === 'string' && record.schema.startsWith('oddloop-summary/');
  const values = isSummary ? record.settings : record;
  if (!isRecord(values)) throw unusable(file, 'no settings in it');
  const { accepted, troubles } = checkSettings(values);
  if (troubles.length > 0) {
    throw new InputError(
      troubles.map(
        (trouble): InputFault => ({
          place: { file, column: trouble.name },
          found: trouble.found,
          expected: trouble.expected,
          remedy: `Correct it, or take it out for the default; an example: ${trouble.example}.`,
        }),
      ),
    );
  }
  return { settings: accepted, sha256: isSummary ? fingerprints(record) : new Map() };
}

function parsedRecord(file: string, text: string): Readonly<Record<string, unknown>> {
  let value: unknown;
  try {
    value = JSON.parse(text.replace(/^\uFEFF/, ''));
  } catch (error) {
    throw unusable(file, `no JSON (${error instanceof Error ? error.message : error})`);
  }
  if (!isRecord(value)) throw unusable(file, 'JSON without names in it');
  return value;
}

function unusable(file: string, found: string): InputError {
  return new InputError([{ place: { file }, found, expected: 'settings in JSON', remedy: REMEDY }]);
}

function isRecord(value: unknown): value is Readonly<Record<string, unknown>> {
  return typeof value === 'object' && value !== null && !Array.isArray(value);
}

function fingerprints(summary: Readonly<Record<string, unknown>>): Map<string, string> {
  const found = new Map<string, string>();
  const input = isRecord(summary.input) ? summary.input : summary;
  for (const file of Array.isArray(input.files) ? input.files : []) {
    if (isRecord(file) && typeof file.name === 'string' && typeof file.sha256 === 'string') {
      found.set(file.name, file.sha256);
    }
  }
  return found;
}
