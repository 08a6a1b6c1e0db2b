/** Runs the real program in a process of its own, and reads the tables that it writes. */
import { spawn } from 'node:child_process';
import { readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';

/** How a process ended, and all that it said. */
export interface Outcome {
  readonly code: number | null;
  readonly stdout: string;
  readonly stderr: string;
}

/** A row of a table by column name; an empty text is an empty cell. */
export type CsvRow = Readonly<Record<string, string>>;

/** The file that `bin` names; it runs what `npm run build` made. */
export const programPath = (): string => fileURLToPath(new URL('../../bin/oddloop.js', import.meta.url));

/** Runs a command to its end; nothing is sent to its stdin. */
export const runCommand = (
  command: string,
  args: readonly string[],
  { cwd }: { readonly cwd: string },
): Promise<Outcome> =>
  new Promise((done, fail) => {
    const child = spawn(command, args, { cwd, stdio: ['ignore', 'pipe', 'pipe'] });
    let stdout = '';
    let stderr = '';
    child.stdout.setEncoding('utf8').on('data', (text: string) => {
      stdout += text;
    });
    child.stderr.setEncoding('utf8').on('data', (text: string) => {
      stderr += text;
    });
    child.on('error', fail);
    child.on('close', (code) => done({ code, stdout, stderr }));
  });

export const runOddloop = (args: readonly string[], where: { readonly cwd: string }): Promise<Outcome> =>
  runCommand(process.execPath, [programPath(), ...args], where);

/** Reads a table as the contract describes it: comma, header row, quotes where needed, LF. */
export const readCsv = (path: string): CsvRow[] => {
  const [header = [], ...rows] = cellsOf(readFileSync(path, 'utf8'));
  return rows.map((row) => {
    if (row.length !== header.length) throw new Error(`${path}: ${row.length} cells under ${header.length} headers`);
    return Object.fromEntries(header.map((name, column) => [name, row[column]!]));
  });
};

const cellsOf = (text: string): string[][] => {
  const rows: string[][] = [];
  let row: string[] = [];
  for (const [, quoted, bare, end] of text.matchAll(/(?:"((?:[^"]|"")*)"|([^",\n]*))(,|\n|$)/g)) {
    if (end === '' && bare === '' && row.length === 0) break;
    row.push(quoted === undefined ? (bare ?? '') : quoted.replaceAll('""', '"'));
    if (end === ',') continue;
    rows.push(row);
    row = [];
  }
  return rows;
};
