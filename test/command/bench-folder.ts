import { type SpawnSyncReturns, spawnSync } from 'node:child_process';
import { mkdtempSync, realpathSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { afterEach, beforeEach } from 'vitest';

/** The program as it is installed: the file that `bin` names, running what `npm run build` made. */
export const PROGRAM = fileURLToPath(new URL('../../bin/oddloop.js', import.meta.url));

/** A bench folder of its own for each test of the file that calls this. */
export function benchFolder(): {
  /** Runs the program in the folder and waits for its end. */
  readonly run: (...words: string[]) => SpawnSyncReturns<string>;
  readonly runWith: (environment: Record<string, string>, ...words: string[]) => SpawnSyncReturns<string>;
  readonly write: (name: string, text: string) => void;
  readonly at: (name: string) => string;
} {
  let folder = '';
  beforeEach(() => {
    folder = realpathSync(mkdtempSync(join(tmpdir(), 'oddloop-test-')));
  });
  afterEach(() => rmSync(folder, { recursive: true, force: true }));
  const runWith = (environment: Record<string, string>, ...words: string[]) =>
    spawnSync(process.execPath, [PROGRAM, ...words], {
      cwd: folder,
      encoding: 'utf8',
      env: { ...process.env, ...environment },
      // An open pipe that nobody writes to: a run that waits for it never ends, and is stopped.
      stdio: ['pipe', 'pipe', 'pipe'],
      timeout: 30_000,
    });
  return {
    run: (...words) => runWith({}, ...words),
    runWith,
    write: (name, text) => writeFileSync(join(folder, name), text),
    at: (name) => join(folder, name),
  };
}

const LEVELS: Readonly<Record<string, number>> = { N01: -20, N02: -23, N03: -26, N04: -29 };

/** A long table of the pairs named, level = sum of the two units' levels + 0.1 dB for every second reading. */
export function pairsCsv(pairs: readonly (readonly [string, string])[], frequencies = [1000, 2000, 4000]): string {
  let row = 0;
  const lines = pairs.flatMap(([emitter, receiver]) =>
    frequencies.map((frequency) => {
      const level = (LEVELS[emitter] ?? 0) + (LEVELS[receiver] ?? 0) + 0.1 * (row++ % 2);
      return `${emitter},${receiver},${frequency},${level.toFixed(1)}`;
    }),
  );
  return `emitter,receiver,frequency_hz,level_db\n${lines.join('\n')}\n`;
}

/** All pairs of four units. */
export const RING_WITH_DIAGONALS = [
  ['N01', 'N02'],
  ['N02', 'N03'],
  ['N03', 'N04'],
  ['N04', 'N01'],
  ['N01', 'N03'],
  ['N02', 'N04'],
] as const;
