/** Each file of the corpus has one fault; the run ends in words, loses nothing and leaves nothing half-written. */
import { readdirSync, readFileSync, statSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { describe, expect, test } from 'vitest';
import { type Files, solveFiles } from '../command/solve-folder.ts';
import { CORPUS } from './corpus.ts';
import { STACK } from './stack.ts';

const folder = fileURLToPath(new URL('./corpus/', import.meta.url));
const kept: Files = Object.fromEntries(
  readdirSync(folder)
    .filter((name) => statSync(folder + name).isFile())
    .map((name) => [name, readFileSync(folder + name)]),
);

/** Cells that are due a level: a row each, except in the wide layout. */
const due = (text: string): number => {
  const [header, ...lines] = text.trim().split('\n');
  return header!.includes('>') ? lines.length * (header!.split(',').length - 1) : lines.length;
};

test('the corpus holds no file that no check uses', () => {
  const used = new Set(CORPUS.flatMap(({ file, args }) => [file, ...(args ?? [])]));
  expect(Object.keys(kept).filter((name) => !used.has(name))).toEqual([]);
});

describe('broken input', () => {
  test.each(CORPUS)('$fault ($file) ends in words', async (broken) => {
    const { file, args, code, says, unused, bytes } = broken;
    const solved = await solveFiles({ ...kept, ...(bytes && { [file]: bytes }) }, [
      ...(args ?? [file]),
      '--model',
      'reciprocal',
    ]);
    expect(solved.stderr).not.toMatch(STACK);
    expect(solved.code, solved.said).toBe(code);
    for (const words of says) expect(code === 0 ? solved.said : solved.stderr).toMatch(words);
    expect(solved.added).toEqual(code === 0 ? ['out'] : []);
    if (code !== 0) expect(solved.stdout).toBe('');
    if (unused) {
      const rows = solved.rows('unused.csv');
      expect(rows.map((row) => Number(row.line))).toEqual(unused);
      for (const row of rows) {
        expect(row.file).toBe(file);
        expect(row.reason).not.toBe('');
      }
      const lost = due(String(kept[file])) - solved.rows('residuals.csv').length - rows.length;
      expect(lost, 'rows that are neither used nor named').toBe(0);
    }
  });
});

test('the hint for a file that a log names does not point to the folder of the program, since the path is read from the log', async () => {
  const solved = await solveFiles({ 'bench/log.csv': 'file,emitter,receiver\nnowhere.csv,A,B\n' }, ['bench/log.csv']);
  expect(solved.code).toBe(3);
  expect(solved.stderr).toMatch(/nowhere\.csv/);
  expect(solved.stderr).not.toMatch(/program was started/);
});
