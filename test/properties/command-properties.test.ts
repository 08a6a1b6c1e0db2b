/** What must happen to the results when the input is changed in a way whose effect is known, seen through the program. */
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import type { CsvRow } from '../command/run-oddloop.ts';
import { numberIn, type Reading, solveReadings, WRITTEN, WRITTEN_DIGITS } from '../command/solve-folder.ts';

/** Each run starts the program twice. */
const RUNS = { seed: 20260712, numRuns: 4 } as const;

/** Two written results, each rounded by half a unit: levels at the sixth decimal, the rest at the sixth digit. */
const tolerance = (column: string, value: number) =>
  (column === 'level_db' ? 2 * WRITTEN : 2 * WRITTEN_DIGITS * Math.abs(value)) * (1 + 1e-6);

interface Cell {
  readonly i: number;
  readonly j: number;
  readonly frequency: number;
  readonly level: number;
  readonly u: number;
}

const tenths = (min: number, max: number) => fc.integer({ min: min * 10, max: max * 10 }).map((value) => value / 10);

/** A complete set of 4 or 5 units, or one thinned by a pair, at one to three frequencies: solvable and with spare readings. */
const set: fc.Arbitrary<readonly Cell[]> = fc
  .record({ units: fc.constantFrom(4, 5), frequencies: fc.integer({ min: 1, max: 3 }), thin: fc.boolean() })
  .chain(({ units, frequencies, thin }) => {
    const pairs = Array.from({ length: units }, (_, i) =>
      Array.from({ length: units - 1 - i }, (_, k): [number, number] => [i, i + k + 1]),
    ).flat();
    const kept = thin ? pairs.slice(0, -1) : pairs;
    const cells = Array.from({ length: frequencies }, (_, f) => kept.map(([i, j]) => ({ i, j, f }))).flat();
    return fc.tuple(
      ...cells.map(({ i, j, f }) =>
        fc.record({
          i: fc.constant(i),
          j: fc.constant(j),
          frequency: fc.constant(1000 * 2 ** f),
          level: tenths(-60, -20),
          u: tenths(0.1, 1),
        }),
      ),
    );
  });

const NAMES = ['T1', 'T2', 'T3', 'T4', 'T5'];

const asReadings = (
  readings: readonly Cell[],
  change: (reading: Cell) => Partial<Cell> = () => ({}),
  names: readonly string[] = NAMES,
): Reading[] =>
  readings.map((reading) => {
    const { i, j, level, frequency, u } = { ...reading, ...change(reading) };
    return [names[i]!, names[j]!, level, { frequency_hz: frequency, u_db: u }];
  });

type Keyed = ReadonlyMap<string, CsvRow>;

const responses = async (readings: readonly Reading[], model = 'reciprocal'): Promise<Keyed> => {
  const solved = await solveReadings(readings, ['--model', model]);
  return new Map(solved.rows('responses.csv').map((row) => [`${row.unit} ${row.role} ${row.frequency_hz}`, row]));
};

/** Every row of `before` is in `after` under its new key, each column off by what `expected` makes of it. */
const expectChange = (
  before: Keyed,
  after: Keyed,
  expected: Readonly<Record<string, (value: number) => number>>,
  rename: (key: string) => string = (key) => key,
) => {
  expect([...after.keys()].sort()).toEqual([...before.keys()].map(rename).sort());
  for (const [key, row] of before) {
    const other = after.get(rename(key))!;
    expect([row.status, row.role]).toEqual([other.status, other.role]);
    for (const [column, change] of Object.entries(expected)) {
      const [value, seen] = [change(numberIn(row, column)), numberIn(other, column)];
      expect(Number.isFinite(seen), `${key} ${column}`).toBe(true);
      expect(Math.abs(seen - value), `${key} ${column}: ${seen}, expected ${value}`).toBeLessThanOrEqual(
        tolerance(column, value),
      );
    }
  }
};

const same = (value: number) => value;
const SAME = { level_db: same, u_db: same, k: same, expanded_db: same } as const;

describe('the results change exactly as they must', () => {
  test('other names of units: the same results under the other names', async () => {
    const others = ['zebra', 'S#2', 'left, front', 'Ä 4', '5'];
    await fc.assert(
      fc.asyncProperty(set, async (readings) => {
        const after = await responses(asReadings(readings, undefined, others));
        const rename = (key: string) => key.replace(/^T(\d)/, (_, digit: string) => others[Number(digit) - 1]!);
        expectChange(await responses(asReadings(readings)), after, SAME, rename);
      }),
      RUNS,
    );
  });

  test('rows in another order: the same results', async () => {
    const shuffled = set.chain((readings) =>
      fc.record({
        readings: fc.constant(readings),
        order: fc.shuffledSubarray([...readings], { minLength: readings.length }),
      }),
    );
    await fc.assert(
      fc.asyncProperty(shuffled, async ({ readings, order }) => {
        expectChange(await responses(asReadings(readings)), await responses(asReadings(order)), SAME);
      }),
      RUNS,
    );
  });

  test('emitter and receiver swapped in the reciprocal model: the same results', async () => {
    await fc.assert(
      fc.asyncProperty(set, async (readings) => {
        const after = await responses(asReadings(readings, ({ i, j }) => ({ i: j, j: i })));
        expectChange(await responses(asReadings(readings)), after, SAME);
      }),
      RUNS,
    );
  });

  test('emitter and receiver swapped in the directional model: each unit has its emit and receive exchanged', async () => {
    const both = set.map((readings) => [
      ...readings,
      ...readings.map((reading) => ({ ...reading, i: reading.j, j: reading.i, level: reading.level - 3 + reading.u })),
    ]);
    await fc.assert(
      fc.asyncProperty(both, async (readings) => {
        const before = await responses(asReadings(readings), 'directional');
        const after = await responses(
          asReadings(readings, ({ i, j }) => ({ i: j, j: i })),
          'directional',
        );
        for (const [key, row] of before) {
          const other = after.get(
            key.replace(/ emit | receive /, (role) => (role === ' emit ' ? ' receive ' : ' emit ')),
          )!;
          for (const column of ['level_db', 'u_db']) {
            const [value, seen] = [numberIn(row, column), numberIn(other, column)];
            expect(Math.abs(seen - value), key).toBeLessThanOrEqual(tolerance(column, value));
          }
        }
        expect(before.size).toBe(after.size);
      }),
      RUNS,
    );
  });

  test('a constant on all levels: half of it on every unit, and no uncertainty changes', async () => {
    await fc.assert(
      fc.asyncProperty(set, tenths(-15, 15), async (readings, constant) => {
        const after = await responses(asReadings(readings, ({ level }) => ({ level: level + constant })));
        expectChange(await responses(asReadings(readings)), after, {
          ...SAME,
          level_db: (level) => level + constant / 2,
        });
      }),
      RUNS,
    );
  });

  test('all given uncertainties times a factor: no level changes, every uncertainty is multiplied', async () => {
    await fc.assert(
      fc.asyncProperty(set, fc.constantFrom(0.1, 0.5, 3, 10), async (readings, factor) => {
        const after = await responses(asReadings(readings, ({ u }) => ({ u: u * factor })));
        const times = (value: number) => value * factor;
        expectChange(await responses(asReadings(readings)), after, { ...SAME, u_db: times, expanded_db: times });
      }),
      RUNS,
    );
  });

  test('the same files twice: the same bytes', async () => {
    await fc.assert(
      fc.asyncProperty(set, async (readings) => {
        const once = await solveReadings(asReadings(readings), ['--model', 'reciprocal']);
        const again = await solveReadings(asReadings(readings), ['--model', 'reciprocal']);
        for (const name of ['responses.csv', 'takes.csv', 'residuals.csv', 'covariance.json', 'summary.json']) {
          expect(again.text(name), name).toBe(once.text(name));
          expect(once.text(name), name).toBeDefined();
        }
      }),
      RUNS,
    );
  });
});
