/** The Monte Carlo check through the program's own input. */
import { describe, expect, test } from 'vitest';
import { longCsv, type Reading, solveFiles, solveReadings } from './solve-folder.ts';

const triangle: Reading[] = [
  ['A', 'B', -41.37, { u_db: 0.3 }],
  ['A', 'C', -38.92, { u_db: 0.3 }],
  ['B', 'C', -44.05, { u_db: 0.3 }],
];
const ARGS = ['--model', 'reciprocal', '--monte-carlo', '40000'];

describe('solve --monte-carlo', () => {
  test('says on the terminal and in the summary, per band, that a linear set is validated', async () => {
    const solved = await solveReadings(triangle, ARGS);
    const { monte_carlo: check } = JSON.parse(solved.text('summary.json')!);
    expect(check).toMatchObject({ draws: 40_000, seed: 1, too_close_to_noise: 0 });
    expect(check.bands).toHaveLength(1);
    // u = 0.26 dB: to one digit half a unit is 0.05 dB, to two 0.005 dB, which 40,000 draws cannot tell.
    expect(check.bands[0]).toMatchObject({ verdict: 'validated', digits: 1, tolerance_db: 0.05 });
    expect(solved.stdout).toMatch(/Monte Carlo check with 40000 draws/);
    expect(solved.stdout).toMatch(/validated in 1 of 1 band/);
  });

  test('gives the same bytes for the same seed, and other draws for another', async () => {
    const summary = async (args: readonly string[]) =>
      (await solveReadings(triangle, [...ARGS, ...args])).text('summary.json')!;
    const first = await summary([]);
    expect(await summary([])).toBe(first);
    expect(JSON.parse(await summary(['--seed', '2'])).monte_carlo.bands).not.toEqual(
      JSON.parse(first).monte_carlo.bands,
    );
  });

  test('is not in a summary where it was not asked for', async () => {
    const solved = await solveReadings(triangle, ['--model', 'reciprocal']);
    expect(JSON.parse(solved.text('summary.json')!).monte_carlo).toBeNull();
  });

  test.each([
    ['--monte-carlo', '10'],
    ['--monte-carlo', 'many'],
    ['--seed', '1.5'],
  ])('%s %s is wrong usage', async (option, value) => {
    const outcome = await solveFiles({ 'pairs.csv': longCsv(triangle) }, ['pairs.csv', option, value]);
    expect(outcome.code).toBe(2);
    expect(outcome.stderr).toContain(`${option}: found "${value}"; expected a whole number`);
  });
});
