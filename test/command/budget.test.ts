/** Systematic effects and the budget through the program's own input. */
import { describe, expect, test } from 'vitest';
import { longCsv, numberIn, type Reading, solveFiles, solveReadings, WRITTEN_DIGITS } from './solve-folder.ts';

const RECIPROCAL = ['--model', 'reciprocal'] as const;

const triangle: Reading[] = [
  ['A', 'B', -41.37, { u_db: 0.05, session: 'day 1' }],
  ['A', 'C', -38.92, { u_db: 0.05, session: 'day 1' }],
  ['B', 'C', -44.05, { u_db: 0.05, session: 'day 2' }],
];

describe('solve --budget', () => {
  /** IEC 61094-2:2009, IEC 60565-1:2020 (three-transducer reciprocity): u² = (3 · 0.05² + 0.02²) / 4, by hand. */
  test('an effect of all levels enters every response by half, and budget.csv lists it by unit and band', async () => {
    const solved = await solveReadings(triangle, [...RECIPROCAL, '--budget', 'budget.csv'], {
      'budget.csv': 'name,u_db,applies_to\nanalyser,0.02,all\n',
    });
    const expected = Math.sqrt(3 * 0.05 ** 2 + 0.02 ** 2) / 2;
    for (const unit of ['A', 'B', 'C']) {
      expect(Math.abs(numberIn(solved.response(unit), 'u_db') / expected - 1)).toBeLessThan(WRITTEN_DIGITS);
    }
    const rows = solved.rows('budget.csv').filter((row) => row.unit === 'A');
    expect(rows.map((row) => row.source)).toEqual(['reading', 'analyser', 'rounding']);
    expect(rows.map((row) => [row.band_from_hz, row.band_to_hz])).toEqual([
      ['891.250938134', '1122.0184543'],
      ['891.250938134', '1122.0184543'],
      ['891.250938134', '1122.0184543'],
    ]);
    const squares = rows.reduce((sum, row) => sum + numberIn(row, 'u_db') ** 2, 0);
    expect(Math.abs(squares / expected ** 2 - 1)).toBeLessThan(1e-9);
    const shares = rows.reduce((sum, row) => sum + numberIn(row, 'share'), 0);
    expect(shares).toBeCloseTo(1, 5);
    expect(numberIn(rows[1]!, 'u_db')).toBeCloseTo(0.01, 9);
  });

  test('types A and B, sensitivities and the file stand in the summary', async () => {
    const solved = await solveReadings(triangle, [...RECIPROCAL, '--budget', 'budget.csv'], {
      'budget.csv': 'name,u_db,dof,applies_to\nmounting,0.03,4,unit B\n',
    });
    const summary = JSON.parse(solved.text('summary.json')!);
    const ofB = summary.budget.find(({ name }: { name: string }) => name === 'B');
    const mounting = ofB.sources.find(({ source }: { source: string }) => source === 'mounting');
    expect(mounting).toEqual({ source: 'mounting', type: 'A', u_db: 0.03, share: expect.any(Number), sensitivity: 1 });
    expect(summary.settings.budget).toBe('budget.csv');
    expect(summary.input.files.map(({ layout }: { layout: string }) => layout)).toEqual(['long', 'budget']);
    expect(numberIn(solved.response('B'), 'dof')).toBeGreaterThan(4);
    expect(solved.response('A').dof).toBe('inf');
  });

  test.each([
    ['unit Z', 'the unit Z, which no take names'],
    ['session night', 'the session night, which no take names'],
  ])('a line for %s ends with the code for input that cannot be used', async (target, words) => {
    const files = { 'pairs.csv': longCsv(triangle), 'budget.csv': `name,u_db,applies_to\nx,0.1,${target}\n` };
    const outcome = await solveFiles(files, ['pairs.csv', '--budget', 'budget.csv']);
    expect(outcome.code).toBe(3);
    expect(outcome.stderr).toContain(`budget.csv:2 applies_to`);
    expect(outcome.stderr).toContain(words);
    expect(outcome.added).toEqual([]);
  });
});
