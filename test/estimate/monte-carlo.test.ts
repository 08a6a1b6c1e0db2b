import { describe, expect, it } from 'vitest';
import { type MonteCarlo, monteCarlo } from '../../src/estimate/monte-carlo.ts';
import { settle } from '../../src/findings/settle.ts';
import { buildModel } from '../../src/model/build-model.ts';
import { DEFAULT_MODEL_OPTIONS, type ModelOptions } from '../../src/model/model-options.ts';
import { systematicEffects } from '../../src/model/systematic-effects.ts';
import { gammaDraw } from '../../src/numeric/gamma-draw.ts';
import { numericalTolerance } from '../../src/numeric/numerical-tolerance.ts';
import { randomStream } from '../../src/numeric/random.ts';
import type { BudgetLine, Distribution } from '../../src/readings/budget-lines.ts';
import type { Readings } from '../../src/readings/readings.ts';
import { levelDraws } from '../../src/takes/drawn-levels.ts';
import { type GatherOptions, gatherTakes } from '../../src/takes/gather-takes.ts';
import type { Grid } from '../../src/takes/take-set.ts';
import { logSpaced, simulatePairs } from '../simulation/pair-set.ts';
import { readingsMade } from '../takes/readings-made.ts';

const RECIPROCAL: ModelOptions = { ...DEFAULT_MODEL_OPTIONS, model: 'reciprocal' };
const AS_MEASURED: GatherOptions = { grid: { kind: 'as measured' }, band: undefined };

const line = (name: string, distribution: Distribution, more: Partial<BudgetLine> = {}): BudgetLine => ({
  name,
  place: { file: 'budget.csv', line: 2 },
  uncertainty: 1,
  distribution,
  dof: Number.POSITIVE_INFINITY,
  type: 'B',
  target: 'unit',
  label: 'A',
  from: 0,
  to: Number.POSITIVE_INFINITY,
  ...more,
});

const triangle = (u: number, more: Partial<Readings> = {}): Readings => ({
  ...readingsMade([
    { emitter: 'A', receiver: 'B', rows: [[1000, -41.37, u]] },
    { emitter: 'A', receiver: 'C', rows: [[1000, -38.92, u]] },
    { emitter: 'B', receiver: 'C', rows: [[1000, -44.05, u]] },
  ]),
  ...more,
});

async function checked(
  readings: Readings,
  draws: number,
  lines: readonly BudgetLine[] = [],
  { seed = 1, gather = AS_MEASURED, model: options = RECIPROCAL } = {},
): Promise<MonteCarlo> {
  const set = gatherTakes(readings, gather);
  const model = buildModel(set, options);
  const effects = systematicEffects(set, lines);
  const { solution } = await settle(set, model, { risk: 0.05, effects });
  const levels = levelDraws(readings, gather, set);
  return monteCarlo(set, model, solution, { draws, seed, coverage: 0.95, levels, effects });
}

describe('a Monte Carlo check', () => {
  /** JCGM 101:2008, 9.2.2 and 9.2.3: four inputs of standard deviation 1; 95 % interval ±3.92 if normal, ±3.88 if rectangular. */
  it('finds the interval of four rectangular effects that the source gives, against the linear one', async () => {
    const four = ['a', 'b', 'c', 'd'].map((name) => line(name, 'rectangular'));
    const { bands } = await checked(triangle(1e-4), 400_000, four);
    const { distance, samplingError, tolerance, digits, verdict } = bands[0]!;
    expect(Math.abs(distance - (3.919928 - 3.879407))).toBeLessThan(4 * samplingError);
    // u = 2.0: half a unit of the second digit.
    expect([tolerance, digits, verdict]).toEqual([0.05, 2, 'validated']);
  });

  it('agrees with the linear result for four normal effects, whatever their degrees of freedom', async () => {
    const lines = ['a', 'b', 'c', 'd'].map((name, k) => line(name, 'normal', { dof: 2 + k }));
    const { bands } = await checked(triangle(1e-4), 100_000, lines);
    expect(bands[0]!.distance).toBeLessThan(4 * bands[0]!.samplingError);
  });

  it('does not validate one u-shaped effect, whose interval is that of an arcsine', async () => {
    const { bands } = await checked(triangle(1e-4), 100_000, [line('a', 'u-shaped')]);
    // ±√2 cos(0.025 π) against ±1.959964.
    const expected = 1.959964 - Math.SQRT2 * Math.cos(0.025 * Math.PI);
    expect(bands[0]!.verdict).toBe('not validated');
    expect(Math.abs(bands[0]!.distance - expected)).toBeLessThan(4 * bands[0]!.samplingError);
  });

  it('does not validate levels that stand hardly above their noise, and says how often they sink into it', async () => {
    const noise = (clearance: number) =>
      triangle(1, { noise: Float64Array.of(-41.37, -38.92, -44.05).map((l) => l - clearance) });
    const [near, far] = [await checked(noise(3.2), 20_000), await checked(noise(30), 20_000)];
    expect(near.bands[0]!.verdict).toBe('not validated');
    expect(near.tooClose).toBeGreaterThan(0.005);
    expect(far.bands[0]!.verdict).not.toBe('not validated');
    expect(far.tooClose).toBe(0);
  });

  it('draws averaged power spectra by their own distribution: few averages are not validated, many are', async () => {
    const averaged = (n: number) =>
      triangle(Number.NaN, { averages: new Float64Array(3).fill(n), uncertainty: undefined });
    expect((await checked(averaged(1), 400_000)).bands[0]!.verdict).toBe('not validated');
    expect((await checked(averaged(400), 200_000)).bands[0]!.verdict).toBe('validated');
  });

  const simulated = (mounted: 'for each pair' | 'for each round') =>
    simulatePairs({
      seed: 5,
      units: 5,
      seatings: 6,
      repeats: 2,
      mounted,
      repeatScatter: 0.1,
      reseatScatter: 0.3,
      frequencies: logSpaced(12, 10_000, 12_000),
    }).set;

  it.each(['for each pair', 'for each round'] as const)(
    'agrees with the linear result of repeats and seatings, mounted %s',
    async (mounted) => {
      const set = simulated(mounted);
      const width = set.frequencies.length;
      const readings = readingsMade(
        set.takes.map((take, t) => ({
          ...take,
          rows: Array.from(set.frequencies, (f, k) => [f, set.levels[t * width + k]!] as const),
        })),
      );
      const { bands } = await checked(readings, 4000);
      for (const { distance, samplingError, verdict } of bands) {
        expect(verdict).not.toBe('not validated');
        expect(distance).toBeLessThan(6 * samplingError);
      }
    },
  );

  it.each([
    { kind: 'octave bands', fraction: 3 },
    { kind: 'per decade', points: 20 },
  ] as const satisfies readonly Grid[])('runs through the grid: %j', async (grid) => {
    const rows = Array.from(logSpaced(60, 900, 3000), (f) => [f, -40 + 5 * Math.sin(f / 100), 0.3] as const);
    const readings = readingsMade([
      { emitter: 'A', receiver: 'B', rows },
      { emitter: 'A', receiver: 'C', rows },
      { emitter: 'B', receiver: 'C', rows },
    ]);
    const { bands } = await checked(readings, 20_000, [], { gather: { grid, band: undefined } });
    expect(bands.length).toBeGreaterThan(2);
    for (const { distance, samplingError } of bands) expect(distance).toBeLessThan(5 * samplingError);
  });

  it('gives the same figures for the same seed, and others for another', async () => {
    const [a, b, c] = await Promise.all([1, 1, 2].map((seed) => checked(triangle(0.3), 1000, [], { seed })));
    expect(a).toEqual(b);
    expect(c!.bands[0]!.distance).not.toBe(a!.bands[0]!.distance);
  });
});

/** JCGM 101:2008, 7.9.2, examples 1 and 2: 0.00035 to two digits has 0.000005, to one digit 0.00005; 2 to one digit 0.5. */
describe('the numerical tolerance', () => {
  it('is half a unit of the last digit stated', () => {
    expect(numericalTolerance(0.00035, 2)).toBeCloseTo(0.000005, 18);
    expect(numericalTolerance(0.00035, 1)).toBeCloseTo(0.00005, 18);
    expect(numericalTolerance(2, 1)).toBe(0.5);
    expect(numericalTolerance(9.96, 2)).toBe(0.5);
  });
});

describe('gamma draws', () => {
  it.each([0.4, 1, 7.5])('of shape %d have its mean and variance', (shape) => {
    const stream = randomStream(3);
    const draws = Float64Array.from({ length: 100_000 }, () => gammaDraw(stream, shape));
    const mean = draws.reduce((sum, x) => sum + x, 0) / draws.length;
    const variance = draws.reduce((sum, x) => sum + (x - mean) ** 2, 0) / (draws.length - 1);
    // Mean and variance are the shape; four standard errors, that of the variance from the kurtosis 3 + 6/shape.
    expect(Math.abs(mean - shape)).toBeLessThan(4 * Math.sqrt(shape / draws.length));
    expect(Math.abs(variance / shape - 1)).toBeLessThan(4 * Math.sqrt((2 + 6 / shape) / draws.length));
  });
});
