/** Differences between units of a result, and matched sets, through the program's own commands. */
import { join } from 'node:path';
import { describe, expect, test } from 'vitest';
import { normalUpper } from '../../src/numeric/normal.ts';
import { type CsvRow, readCsv, runOddloop } from './run-oddloop.ts';
import { numberIn, type Reading, solveReadings, WRITTEN, WRITTEN_DIGITS } from './solve-folder.ts';

const triangle: Reading[] = [
  ['A', 'B', -41.37, { u_db: 0.05 }],
  ['A', 'C', -38.92, { u_db: 0.05 }],
  ['B', 'C', -44.05, { u_db: 0.05 }],
];
const BUDGET = { 'budget.csv': 'name,u_db\nanalyser,0.02\n' };
const solved = () => solveReadings(triangle, ['--model', 'reciprocal', '--budget', 'budget.csv'], BUDGET);
const compare = async (args: readonly string[]) => {
  const { folder } = await solved();
  const outcome = await runOddloop(['compare', 'out', ...args], { cwd: folder });
  return { ...outcome, folder, rows: (name: string): CsvRow[] => readCsv(join(folder, 'out', name)) };
};

describe('oddloop compare', () => {
  /** Three-transducer reciprocity by hand: H = -18.12, -23.25, -20.80 dB; equal u: var(H_A − H_B) = 2 u², an offset of all levels cancels. */
  test('gives the difference of each two units with the U that their correlation leaves', async () => {
    const { code, stdout, rows } = await compare(['A', 'B', 'C']);
    expect(code).toBe(0);
    const found = rows('differences.csv');
    expect(found.map((row) => `${row.unit_a} ${row.unit_b}`)).toEqual(['A B', 'A C', 'B C']);
    [5.13, 2.68, -2.45].forEach((expected, k) => {
      expect(Math.abs(numberIn(found[k]!, 'difference_db') - expected)).toBeLessThan(2 * WRITTEN);
      const u = Math.sqrt(2) * 0.05;
      expect(Math.abs(numberIn(found[k]!, 'u_db') / u - 1)).toBeLessThan(WRITTEN_DIGITS);
      // Normal quantile for 95 %: 1.959964.
      expect(numberIn(found[k]!, 'expanded_db')).toBeCloseTo(1.959964 * u, 5);
    });
    expect(stdout).toMatch(/A less B: more than U \(95 %\) at 1 of 1 frequency/);
  });

  test('leaves a result that solve may replace', async () => {
    const { folder } = await compare(['A', 'B']);
    const again = await runOddloop(['solve', 'pairs.csv', '--out', 'out', '--quiet'], { cwd: folder });
    expect(again.code).toBe(0);
  });

  test('lists sets that match, with the probability that the true responses do', async () => {
    const { code, rows, stdout } = await compare(['--match', '2', '--within', '2.5']);
    expect(code).toBe(0);
    const found = rows('matches.csv');
    expect(found.map((row) => row.units)).toEqual(['B + C']);
    expect(numberIn(found[0]!, 'largest_db')).toBeCloseTo(2.45, 5);
    // |N(2.45, 0.0707)| ≤ 2.5; 10,000 draws: four standard errors of a share near 0.76 are 0.017.
    const expected = 1 - normalUpper(0.05 / (Math.sqrt(2) * 0.05));
    expect(Math.abs(numberIn(found[0]!, 'probability') - expected)).toBeLessThan(0.017);
    expect(stdout).toMatch(/1 set of 2 responses agree within 2.5 dB/);
  });

  test('says so where none match', async () => {
    const { stdout, rows } = await compare(['--match', '3', '--within', '1']);
    expect(rows('matches.csv')).toEqual([]);
    expect(stdout).toMatch(/No 3 responses agree within 1 dB/);
  });

  test.each([
    [['A', 'Z'], 3, 'one of A, B, C'],
    [['A'], 2, 'two units or more'],
    [['--match', '2'], 2, '--within: found --match without it'],
    [['--match', '1', '--within', '1'], 2, 'a whole number from 2 to 12'],
    [['A', 'B', '--band', '5 kHz..6 kHz'], 3, 'a range that holds no frequency of the result'],
  ] as const)('%j ends with code %d and says why', async (args, code, words) => {
    const outcome = await compare(args);
    expect(outcome.code).toBe(code);
    expect(outcome.stderr).toContain(words);
  });

  test('of a folder that is no result is an input fault', async () => {
    const { folder } = await solved();
    const outcome = await runOddloop(['compare', '.', 'A', 'B'], { cwd: folder });
    expect(outcome.code).toBe(3);
    expect(outcome.stderr).toContain('responses.csv');
  });
});
