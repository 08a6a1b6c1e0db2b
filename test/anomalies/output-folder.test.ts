/** Output that cannot be written: said in words, nothing overwritten, nothing half-written. */
import { existsSync, mkdirSync, readdirSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, test } from 'vitest';
import { type Outcome, programPath, runCommand, runOddloop } from '../command/run-oddloop.ts';
import { longCsv, type Reading, scratchFolder } from '../command/solve-folder.ts';
import { STACK } from './stack.ts';

const FREQUENCIES = Array.from({ length: 40 }, (_, i) => 1000 + 50 * i);

const triangle = longCsv(
  FREQUENCIES.flatMap((frequency_hz): Reading[] => [
    ['A', 'B', 10, { frequency_hz }],
    ['A', 'C', 8, { frequency_hz }],
    ['B', 'C', 6, { frequency_hz }],
  ]),
);

const bench = () => scratchFolder({ 'pairs.csv': triangle });
const solveInto = (folder: string, out: string) => runOddloop(['solve', 'pairs.csv', '--out', out], { cwd: folder });

const expectRefusal = (outcome: Outcome, name: RegExp) => {
  expect(outcome.stderr).not.toMatch(STACK);
  expect(outcome.code, outcome.stderr).not.toBe(0);
  expect(outcome.stderr).toMatch(name);
};

describe('an output folder that cannot be written', () => {
  test('a folder whose parent is missing is refused by name, or made complete', async () => {
    const folder = bench();
    const outcome = await solveInto(folder, 'no/such/out');
    if (outcome.code === 0) expect(existsSync(join(folder, 'no/such/out/responses.csv'))).toBe(true);
    else {
      expectRefusal(outcome, /no\/such/);
      expect(readdirSync(folder)).toEqual(['pairs.csv']);
    }
  });

  test('a file in its place is kept and named', async () => {
    const folder = bench();
    writeFileSync(join(folder, 'out'), 'precious');
    expectRefusal(await solveInto(folder, 'out'), /out/);
    expect(readFileSync(join(folder, 'out'), 'utf8')).toBe('precious');
    expect(readdirSync(folder).sort()).toEqual(['out', 'pairs.csv']);
  });

  test('a folder that holds files of somebody else keeps them, untouched', async () => {
    const folder = bench();
    mkdirSync(join(folder, 'out'));
    writeFileSync(join(folder, 'out', 'thesis.txt'), 'precious');
    expectRefusal(await solveInto(folder, 'out'), /out/);
    expect(readdirSync(join(folder, 'out'))).toEqual(['thesis.txt']);
    expect(readFileSync(join(folder, 'out', 'thesis.txt'), 'utf8')).toBe('precious');
    expect(readdirSync(folder).sort()).toEqual(['out', 'pairs.csv']);
  });

  test('the input itself is never the output', async () => {
    const folder = bench();
    expectRefusal(await solveInto(folder, 'pairs.csv'), /pairs\.csv/);
    expect(readFileSync(join(folder, 'pairs.csv'), 'utf8')).toBe(triangle);
  });

  test('an input folder in place of a file is named', async () => {
    const folder = bench();
    mkdirSync(join(folder, 'measurements'));
    const outcome = await runOddloop(['solve', 'measurements', '--out', 'out'], { cwd: folder });
    expectRefusal(outcome, /measurements/);
    expect(outcome.code).toBe(3);
    expect(existsSync(join(folder, 'out'))).toBe(false);
  });
});

describe('a disk that fills', () => {
  /** `ulimit -f 1`: no file may grow beyond one block of 1024 bytes; responses.csv of 120 rows must. */
  test('a write that fails half-way leaves no folder and no remains, and says why', async () => {
    const folder = bench();
    const outcome = await runCommand(
      'bash',
      ['-c', 'ulimit -f 1 && exec "$0" "$1" solve pairs.csv --out out', process.execPath, programPath()],
      { cwd: folder },
    );
    expectRefusal(outcome, /out/);
    expect(readdirSync(folder)).toEqual(['pairs.csv']);
  });

  test.runIf(existsSync('/dev/full'))('a full device behind stdout is no crash', async () => {
    const folder = bench();
    const outcome = await runCommand(
      'bash',
      ['-c', 'exec "$0" "$1" solve pairs.csv --out out >/dev/full', process.execPath, programPath()],
      { cwd: folder },
    );
    expect(outcome.stderr).not.toMatch(STACK);
    expect(outcome.code).not.toBe(0);
  });
});
