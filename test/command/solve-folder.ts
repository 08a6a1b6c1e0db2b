/** Writes input files to a folder of their own, solves them with the real program, and reads the outputs by name. */
import { existsSync, mkdirSync, mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { dirname, join } from 'node:path';
import { onTestFinished } from 'vitest';
import { type CsvRow, type Outcome, readCsv, runOddloop } from './run-oddloop.ts';

/** Text or bytes by file name. */
export type Files = Readonly<Record<string, string | Uint8Array>>;

export interface Solved extends Outcome {
  readonly folder: string;
  /** What the program says, wherever it says it. */
  readonly said: string;
  /** Names in the folder that the run added. */
  readonly added: readonly string[];
  /** Rows of an output file. */
  rows(name: string): CsvRow[];
  /** Text of an output file, absent when it was not written. */
  text(name: string): string | undefined;
  /** Level of a unit; fails where the cell is empty or there is not exactly one such row. */
  level(unit: string, where?: Where): number;
  /** The row of a unit in responses.csv. */
  response(unit: string, where?: Where): CsvRow;
}

export interface Where {
  readonly role?: string;
  readonly mount?: string;
  /** Hz, as written. */
  readonly frequency?: number;
}

/** A folder that lives as long as the running test. */
export const scratchFolder = (files: Files = {}): string => {
  const folder = mkdtempSync(join(tmpdir(), 'oddloop-test-'));
  onTestFinished(() => rmSync(folder, { recursive: true, force: true }));
  for (const [name, content] of Object.entries(files)) {
    mkdirSync(dirname(join(folder, name)), { recursive: true });
    writeFileSync(join(folder, name), content);
  }
  return folder;
};

/** An empty cell is not a number: NaN fails every comparison. */
export const numberIn = (row: CsvRow, column: string): number => {
  const cell = row[column];
  return cell === undefined || cell === '' ? Number.NaN : Number(cell);
};

const outputsOf = (outcome: Outcome, folder: string, added: readonly string[]): Solved => {
  const path = (name: string) => join(folder, 'out', name);
  const rows = (name: string) => readCsv(path(name));
  const response = (unit: string, where: Where = {}): CsvRow => {
    const found = rows('responses.csv').filter(
      (row) =>
        row.unit === unit &&
        (where.role === undefined || row.role === where.role) &&
        (where.mount === undefined || row.mount === where.mount) &&
        (where.frequency === undefined || Math.abs(Number(row.frequency_hz) / where.frequency - 1) < 1e-6),
    );
    if (found.length !== 1)
      throw new Error(`${found.length} rows of ${unit} ${JSON.stringify(where)}\n${outcome.stderr}`);
    return found[0]!;
  };
  return {
    ...outcome,
    folder,
    said: `${outcome.stdout}\n${outcome.stderr}`,
    added,
    rows,
    text: (name) => (existsSync(path(name)) ? readFileSync(path(name), 'utf8') : undefined),
    response,
    level: (unit, where) => numberIn(response(unit, where), 'level_db'),
  };
};

/** Runs `solve` on the files named by the arguments, into `out` beside them. */
export const solveFiles = async (files: Files, args: readonly string[]): Promise<Solved> => {
  const folder = scratchFolder(files);
  const before = new Set(readdirSync(folder));
  const outcome = await runOddloop(['solve', ...args, '--out', 'out'], { cwd: folder });
  return outputsOf(
    outcome,
    folder,
    readdirSync(folder).filter((name) => !before.has(name)),
  );
};

export type Reading = readonly [
  emitter: string,
  receiver: string,
  level: number,
  extra?: Readonly<Record<string, string | number>>,
];

const cell = (value: string | number): string => {
  const text = String(value);
  return /[",\n#]/.test(text) ? `"${text.replaceAll('"', '""')}"` : text;
};

/** A file in the long layout; the frequency is 1000 Hz where `extra` gives none. */
export const longCsv = (readings: readonly Reading[]): string => {
  const extras = [...new Set(readings.flatMap(([, , , extra]) => Object.keys(extra ?? {})))].filter(
    (name) => name !== 'frequency_hz',
  );
  const lines = readings.map(([emitter, receiver, level, extra]) =>
    [emitter, receiver, extra?.frequency_hz ?? 1000, level, ...extras.map((name) => extra?.[name] ?? '')]
      .map(cell)
      .join(','),
  );
  return `${[['emitter', 'receiver', 'frequency_hz', 'level_db', ...extras].join(','), ...lines].join('\n')}\n`;
};

/** Solves readings given in place and demands success. */
export const solveReadings = async (readings: readonly Reading[], args: readonly string[], more: Files = {}) => {
  const solved = await solveFiles({ 'pairs.csv': longCsv(readings), ...more }, ['pairs.csv', ...args]);
  if (solved.code !== 0) throw new Error(`exit ${solved.code}: ${solved.said}`);
  return solved;
};

/** Levels and residuals are written with six decimals: half a unit of the last one; the arithmetic is far below it. */
export const WRITTEN = 5e-7;

/** Uncertainties are written with six digits: at worst half a unit of the last one in 1.00000. */
export const WRITTEN_DIGITS = 5e-6;

/** Names of those rows that miss what was expected, with what was found: empty when all agree. */
export const misses = (
  found: (name: string) => number,
  expected: Readonly<Record<string, number>>,
  tolerance: (value: number) => number = () => WRITTEN,
): string[] =>
  Object.entries(expected).flatMap(([name, value]) => {
    const seen = found(name);
    // Binary fractions of the decimals written: one part in a million of the tolerance.
    return Math.abs(seen - value) <= tolerance(value) * (1 + 1e-6) ? [] : [`${name}: ${seen}, expected ${value}`];
  });

/** The same for uncertainties. */
export const uncertaintyMisses = (
  found: (name: string) => number,
  expected: Readonly<Record<string, number>>,
): string[] => misses(found, expected, (value) => WRITTEN_DIGITS * value);
