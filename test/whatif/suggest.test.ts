import { describe, expect, it } from 'vitest';
import { DEFAULT_MODEL_OPTIONS } from '../../src/model/model-options.ts';
import { candidateBench } from '../../src/whatif/candidate-bench.ts';
import { DEFAULT_TIMES } from '../../src/whatif/costs.ts';
import { CRITERIA, type Criterion } from '../../src/whatif/criterion.ts';
import { type Design, seatingOf } from '../../src/whatif/design.ts';
import { bestSet, exchange, tryEverySet } from '../../src/whatif/exchange.ts';
import { emptyDesign, namedUnits, patternDesign } from '../../src/whatif/patterns.ts';
import { DETECTABILITY, predict } from '../../src/whatif/predict.ts';
import { reachOf } from '../../src/whatif/reach.ts';
import { suggestTakes } from '../../src/whatif/suggest.ts';
import { inverseOf } from './dense-matrix.ts';
import { completeGraph, designOf, type Graph, ladder, UNIT_VARIANCE } from './designs-made.ts';

/** Relative: the search holds open directions by a ridge of 1e-7, and calls sets that differ by less the same. */
const RIDGE = 1e-6;

/** A set of pairs judged by another way: dense inverse of X'X, residual by residual. */
interface Judged {
  readonly uncheckable: number;
  readonly values: Readonly<Record<Criterion, number>>;
}

function judge(units: number, graph: Graph): Judged | undefined {
  const normal = Array.from({ length: units }, () => new Array<number>(units).fill(0));
  for (const [a, b] of graph) {
    for (const [i, j] of [
      [a, a],
      [b, b],
      [a, b],
      [b, a],
    ] as const)
      normal[i]![j] = normal[i]![j]! + 1;
  }
  let c: number[][];
  try {
    c = inverseOf(normal);
  } catch {
    return undefined;
  }
  const variances = c.map((row, i) => row[i]!);
  const left = graph.map(([a, b]) => 1 - (c[a]![a]! + c[b]![b]! + 2 * c[a]![b]!));
  const differences = completeGraph(units).map(([i, j]) => c[i]![i]! + c[j]![j]! - 2 * c[i]![j]!);
  const mean = (values: readonly number[]) => values.reduce((sum, value) => sum + value, 0) / values.length;
  const checked = left.filter((part) => part > 1e-9);
  return {
    uncheckable: left.length - checked.length,
    values: {
      mean: Math.sqrt(mean(variances)),
      worst: Math.sqrt(Math.max(...variances)),
      differences: Math.sqrt(mean(differences)),
      checks: 1 / Math.sqrt(Math.min(...checked)),
    },
  };
}

/** The best of every simple graph with so many pairs, for each criterion; unchecked takes are avoided first. */
function bestGraphs(units: number): Map<string, { uncheckable: number; value: number }> {
  const pairs = completeGraph(units);
  const best = new Map<string, { uncheckable: number; value: number }>();
  for (let bits = 0; bits < 2 ** pairs.length; bits++) {
    const graph = pairs.filter((_, k) => (bits >> k) & 1);
    if (graph.length < units) continue;
    const judged = judge(units, graph);
    if (judged === undefined) continue;
    for (const criterion of CRITERIA) {
      const key = `${criterion} ${graph.length}`;
      const [value, known] = [judged.values[criterion], best.get(key)];
      const isBetter =
        known === undefined ||
        judged.uncheckable < known.uncheckable ||
        (judged.uncheckable === known.uncheckable && value < known.value);
      if (isBetter) best.set(key, { uncheckable: judged.uncheckable, value });
    }
  }
  return best;
}

describe.each([4, 5, 6])('the best pairs of %d units', (units) => {
  const best = bestGraphs(units);
  const most = completeGraph(units).length;
  const candidates = completeGraph(units).map(([a, b]) => seatingOf(namedUnits(units)[a]!, namedUnits(units)[b]!));
  const options = { ...DEFAULT_MODEL_OPTIONS, model: 'reciprocal' as const };
  const bench = candidateBench(emptyDesign(namedUnits(units)), candidates, UNIT_VARIANCE, options);

  describe.each(CRITERIA)('for %s', (criterion) => {
    const counts = Array.from({ length: most - units + 1 }, (_, k) => units + k);
    it.each(counts)('are those of an exhaustive search over every simple graph of %d pairs', (count) => {
      const wanted = best.get(`${criterion} ${count}`)!;
      const search = { count, most: 1, criterion, seed: 1 };
      for (const found of [exchange(bench, search), tryEverySet(bench, search), bestSet(bench, search)]) {
        const { open, uncheckable, value } = found.merit;
        expect({ open, uncheckable }).toEqual({ open: 0, uncheckable: wanted.uncheckable });
        // Where nothing is checked at all there is no smallest shift to speak of.
        if (wanted.value > 0) expect(Math.abs(value / wanted.value - 1)).toBeLessThan(RIDGE);
      }
    });
  });
});

describe('suggestTakes', () => {
  const band = ladder(0.1, 0.5, 0.3);
  const base = { criterion: 'mean', again: false, repeats: 1, seed: 1 } as const;

  it.each(CRITERIA)('promises for %s what the prediction then says of the design', async (criterion) => {
    const design = patternDesign(namedUnits(7), 'hub', { seatings: 2, repeats: 2 });
    const { design: after, steps } = suggestTakes(design, band, { ...base, criterion, add: 6, again: true })!;
    const { bands } = await predict(after, [band], { times: DEFAULT_TIMES });
    const { mean, worst, differences, takes } = bands[0]!;
    const { open, uncheckable, value } = steps.at(-1)!.merit;
    expect({ open, uncheckable }).toEqual({ open: 0, uncheckable: 0 });
    const shifts = Math.max(...takes.map(({ smallestShift }) => smallestShift)) / DETECTABILITY;
    const predicted = { mean, worst, differences: differences.mean, checks: shifts }[criterion];
    expect(Math.abs(value / predicted - 1)).toBeLessThan(RIDGE);
  });

  it.each(CRITERIA)(
    'promises for %s in the directional model what the prediction says, datum included',
    async (criterion) => {
      const model = { ...DEFAULT_MODEL_OPTIONS, model: 'directional' as const };
      const { design, steps } = suggestTakes(emptyDesign(namedUnits(4)), band, { ...base, criterion, add: 9, model })!;
      const { mean, worst, takes, units } = (await predict(design, [band], { times: DEFAULT_TIMES, model })).bands[0]!;
      expect(units.every(({ status }) => status === 'datum')).toBe(true);
      const { open, uncheckable, value } = steps.at(-1)!.merit;
      expect({ open, uncheckable }).toEqual({ open: 0, uncheckable: 0 });
      const shifts = Math.max(...takes.map(({ smallestShift }) => smallestShift)) / DETECTABILITY;
      if (criterion === 'differences') return expect(Number.isFinite(value)).toBe(true);
      const predicted = { mean, worst, checks: shifts }[criterion];
      expect(Math.abs(value / predicted - 1)).toBeLessThan(RIDGE);
    },
  );

  it('adds to the takes that are there, never a forbidden pair, and no pair twice while new ones are left', () => {
    const start: Design = { ...designOf('A>B', 'B>C', 'C>D', 'D>A'), forbidden: [['C', 'A']] };
    const { design, steps, hasAgain } = suggestTakes(start, band, { ...base, add: 1 })!;
    expect(hasAgain).toBe(false);
    expect(steps.map(({ seating }) => [seating.emitter, seating.receiver].sort().join())).toEqual(['B,D']);
    expect(design.seatings.slice(0, 4)).toEqual(start.seatings);
    const further = suggestTakes(start, band, { ...base, add: 3 })!;
    expect(further.hasAgain).toBe(true);
    const pairs = further.steps.map(({ seating }) => [seating.emitter, seating.receiver].sort().join());
    expect(pairs).toHaveLength(3);
    expect(pairs).not.toContain('A,C');
    expect(further.steps.at(-1)!.merit.open).toBe(0);
  });

  it('shows what each added take brings, never less than the one before', () => {
    const { steps, before } = suggestTakes(patternDesign(namedUnits(6), 'ring', { seatings: 1, repeats: 1 }), band, {
      ...base,
      add: 5,
    })!;
    expect(before!.open).toBe(6);
    expect(steps[0]!.merit.open).toBe(0);
    const values = steps.map(({ merit }) => merit.value);
    expect(values).toEqual([...values].sort((a, b) => b - a));
  });

  it('gives the same answer for the same seed', () => {
    const design = patternDesign(namedUnits(12), 'hub', { seatings: 1, repeats: 1 });
    const run = () => suggestTakes(design, band, { ...base, add: 14 })!.design.seatings;
    expect(run()).toEqual(run());
  });

  it('says that a set is open where the allowed pairs close no odd loop, and which pair would', () => {
    const design: Design = {
      ...emptyDesign(['A', 'B', 'C', 'D']),
      forbidden: [
        ['A', 'C'],
        ['B', 'D'],
      ],
    };
    expect(suggestTakes(design, band, { ...base, add: 4 })!.steps.at(-1)!.merit.open).toBe(4);
    const { unreachable, releases } = reachOf(design);
    expect(unreachable).toEqual(['A', 'B', 'C', 'D']);
    expect(releases).toEqual([
      ['A', 'C'],
      ['B', 'D'],
    ]);
  });

  it('has nothing to say where every pair is forbidden', () => {
    const design: Design = { ...emptyDesign(['A', 'B']), forbidden: [['A', 'B']] };
    expect(suggestTakes(design, band, { ...base, add: 1 })).toBeUndefined();
  });
});
