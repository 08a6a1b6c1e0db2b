import { describe, expect, it } from 'vitest';
import { LINK_STATUS, type Solution } from '../../src/estimate/solution.ts';
import { type SolveOptions, solve } from '../../src/estimate/solve.ts';
import { buildModel } from '../../src/model/build-model.ts';
import type { Model } from '../../src/model/model.ts';
import { DEFAULT_MODEL_OPTIONS, type ModelOptions } from '../../src/model/model-options.ts';
import { pairsOf, type TakeLine, takeSetOf } from '../take-set-of.ts';

const NONE = Number.NaN;
const FREQUENCIES = [1000, 1010, 4000];
/** Levels of some tens of dB, combined a few dozen times. */
const ROUNDING = 1e-12;

async function solved(lines: readonly TakeLine[], options: Partial<ModelOptions>, more: SolveOptions = {}) {
  const width = Math.max(1, ...lines.map((line) => line.levels.length));
  const set = takeSetOf(FREQUENCIES.slice(0, width), lines);
  const model = buildModel(set, { ...DEFAULT_MODEL_OPTIONS, ...options });
  return { set, model, solution: await solve(set, model, more) };
}
const link = (model: Model, name: string) => model.links.findIndex((candidate) => candidate.name === name);
const value = ({ model, solution }: { model: Model; solution: Solution }, name: string, f = 0) => {
  const cell = f * model.linksPerFrequency + link(model, name);
  return {
    level: solution.estimates[cell]!,
    u: solution.uncertainty[cell]!,
    dof: solution.dof[cell]!,
    status: LINK_STATUS[solution.status[cell]!],
  };
};
const RECIPROCAL = { model: 'reciprocal' } as const;
const TRIANGLE = { 'A>B': -41.37, 'A>C': -38.92, 'B>C': -44.05 };

describe('reciprocal units by hand', () => {
  // Source: three-transducer reciprocity, H1 = (L12 + L13 − L23)/2; formula from memory, numbers made.
  it('three units with unequal uncertainties: levels, uncertainties and covariances', async () => {
    const u = [0.3, 0.4, 0.5];
    const lines = pairsOf(TRIANGLE).map((line, t) => ({ ...line, u: u[t]! }));
    const { solution } = await solved(lines, RECIPROCAL);
    [-18.12, -23.25, -20.8].forEach((level, k) => {
      expect(solution.estimates[k]).toBeCloseTo(level, 12);
      expect(solution.uncertainty[k]).toBeCloseTo(Math.sqrt(0.5) / 2, 12);
      expect(solution.dof[k]).toBe(Number.POSITIVE_INFINITY);
    });
    const { matrix, scales } = solution.covariance[0]!;
    expect(matrix[1]! * scales[0]!).toBeCloseTo(-0.08, 12);
    expect(matrix[2]! * scales[0]!).toBeCloseTo(-0.045, 12);
    expect(matrix[5]! * scales[0]!).toBeCloseTo(0, 12);
    expect([...solution.redundancy]).toEqual([0, 0, 0]);
    expect(solution.degreesOfFreedom[0]).toBe(0);
  });

  // Source: closed form of the complete set, Griffing 1956, method 4; numbers made.
  it('four units, six pairs, no uncertainty given: it comes from the residuals', async () => {
    const lines = pairsOf({ '1>2': -40.2, '1>3': -38.9, '1>4': -45.1, '2>3': -41, '2>4': -47.3, '3>4': -45.8 });
    const { solution } = await solved(lines, RECIPROCAL);
    [-19.05, -21.2, -19.8, -26.05].forEach((level, k) => {
      expect(solution.estimates[k]).toBeCloseTo(level, 12);
      expect(solution.uncertainty[k]).toBeCloseTo(0.0456435465, 10);
      expect(solution.dof[k]).toBeCloseTo(2, 9);
    });
    [0.05, -0.05, 0, 0, -0.05, 0.05].forEach((residual, t) => {
      expect(solution.residuals[t]).toBeCloseTo(residual, 12);
      expect(solution.redundancy[t]).toBeCloseTo(1 / 3, 12);
    });
    expect(solution.readingUncertainty.source).toBe('residuals');
    expect(solution.readingUncertainty.bands[0]!.standardDeviation).toBeCloseTo(0.0707106781, 10);
  });

  it('one unit against itself has half of the level and half of the uncertainty', async () => {
    const one = await solved([{ emitter: 'A', receiver: 'A', levels: [-40], u: 0.3 }], RECIPROCAL);
    expect(value(one, 'A')).toEqual({ level: -20, u: 0.15, dof: Number.POSITIVE_INFINITY, status: 'ok' });
  });

  it('without uncertainty and without spare readings there are levels but no uncertainty', async () => {
    const { solution } = await solved(pairsOf(TRIANGLE), RECIPROCAL);
    expect(solution.estimates[0]).toBeCloseTo(-18.12, 12);
    expect([...solution.uncertainty, ...solution.dof].every(Number.isNaN)).toBe(true);
    expect(solution.readingUncertainty.source).toBe('none');
    expect(solution.covariance[0]!.scales[0]).toBeNaN();
  });

  it('an open part has no level, while a solvable one beside it does', async () => {
    const both = await solved([...pairsOf(TRIANGLE), ...pairsOf({ 'D>E': -30 })], RECIPROCAL, {
      givenUncertainty: 0.1,
    });
    expect(value(both, 'D')).toEqual({ level: NONE, u: NONE, dof: NONE, status: 'open' });
    expect(value(both, 'A').level).toBeCloseTo(-18.12, 12);
  });

  it('solves each frequency with what was measured there', async () => {
    const lines = pairsOf(TRIANGLE).map((line, t) => ({ ...line, levels: [...line.levels, t === 2 ? NONE : -40] }));
    const gaps = await solved(lines, RECIPROCAL, { givenUncertainty: 0.1 });
    expect(value(gaps, 'B', 0).level).toBeCloseTo(-23.25, 12);
    expect(value(gaps, 'B', 1).status).toBe('open');
    expect(gaps.solution.residuals[2 * 2 + 1]).toBeNaN();
  });

  it('no takes give an empty solution', async () => {
    const { solution } = await solved([], RECIPROCAL);
    expect(solution.readingUncertainty.source).toBe('none');
  });
});

describe('known links', () => {
  const table = (level: readonly number[], u: readonly number[]) => ({
    place: { file: 'table.csv', line: 2 },
    frequency: Float64Array.from(FREQUENCIES.slice(0, level.length)),
    level: Float64Array.from(level),
    uncertainty: Float64Array.from(u),
  });
  const certificate = (unit: string, level: number, u: number) => ({
    ...table([level], [u]),
    unit,
    mount: '',
    role: 'both' as const,
  });

  it('a common path of −3 ± 0.02 dB moves every response by half of it, and carries its uncertainty', async () => {
    const lines = pairsOf(TRIANGLE, { path: 'p', u: 0.05 });
    const withPath = await solved(lines, { ...RECIPROCAL, path: [{ path: 'p', ...table([-3], [0.02]) }] });
    expect(value(withPath, 'A').level).toBeCloseTo(-18.12 + 1.5, 12);
    expect(value(withPath, 'A').u).toBeCloseTo(0.044441, 6);
    expect(value(withPath, 'path p').level).toBeCloseTo(-3, 12);
  });

  it('an exact path is subtracted; a reading beyond the ends of its table is not used', async () => {
    const lines = pairsOf(TRIANGLE, { path: 'p', u: 0.05 }).map((line) => ({ ...line, levels: [...line.levels, -40] }));
    const exact = await solved(lines, { ...RECIPROCAL, path: [{ path: 'p', ...table([-3], [NONE]) }] });
    expect(value(exact, 'A').level).toBeCloseTo(-18.12 + 1.5, 12);
    expect(value(exact, 'A', 1).status).toBe('open');
    expect(exact.solution.residuals[1]).toBeNaN();
  });

  it('a certificate and the readings meet according to their weights', async () => {
    // The triangle says −20 ± √0.75 · 0.2, the certificate −21 ± 0.1: weights 1/0.03 and 1/0.01.
    const lines = pairsOf({ 'A>B': -40, 'A>C': -40, 'B>C': -40 }, { u: 0.2 });
    const both = await solved(lines, { ...RECIPROCAL, references: [certificate('A', -21, 0.1)] });
    expect(value(both, 'A').level).toBeCloseTo(-20 - 3 / 4, 12);
    expect(value(both, 'A').u).toBeCloseTo(Math.sqrt(1 / (1 / 0.03 + 1 / 0.01)), 12);
  });

  it('where nothing was measured a certificate stands as it is, and its uncertainty counts as known', async () => {
    // Every value of u leaves other rounding behind.
    for (const u of [0.1, 0.3, 0.7, 1.1, 0.037]) {
      const lines = pairsOf(TRIANGLE, { path: 'p' }).map((line) => ({ ...line, levels: [NONE, ...line.levels] }));
      const references = [{ ...certificate('A', -17, u) }];
      const alone = await solved(lines, { ...RECIPROCAL, references }, { givenUncertainty: undefined });
      const { level, u: uncertainty, dof } = value(alone, 'A', 0);
      expect(level).toBeCloseTo(-17, 12);
      expect(uncertainty).toBeCloseTo(u, 12);
      expect(dof).toBe(Number.POSITIVE_INFINITY);
    }
  });

  // Source: JCGM 100:2008, G.4.1 (Welch–Satterthwaite).
  it('degrees of freedom weigh what was estimated against what is known', async () => {
    // Two repeats 0.2 dB apart: s² = 0.02 on 1 degree of freedom; B = mean − A: u² = 0.02/2 + 0.3² = 0.1.
    const lines = [
      { emitter: 'A', receiver: 'B', levels: [-30], repeat: '1' },
      { emitter: 'A', receiver: 'B', levels: [-30.2], repeat: '2' },
    ];
    const chain = await solved(lines, { ...RECIPROCAL, references: [certificate('A', -10, 0.3)] });
    expect(value(chain, 'B').level).toBeCloseTo(-20.1, 12);
    expect(value(chain, 'B').u).toBeCloseTo(Math.sqrt(0.1), 12);
    expect(value(chain, 'B').dof).toBeCloseTo(0.1 ** 2 / (0.01 ** 2 / 1), 8);
    expect(value(chain, 'A').dof).toBe(Number.POSITIVE_INFINITY);
  });
});

describe('directional units', () => {
  it('keep mean(emit − receive) = 0, and every sum emit + receive is as measured', async () => {
    const lines = pairsOf({ 'A>B': 5, 'B>A': 1, 'A>C': 4, 'C>A': 2, 'B>C': 3, 'C>B': 7 }, { u: 0.1 });
    const round = await solved(lines, { model: 'directional' });
    const of = (name: string) => value(round, name).level;
    const units = ['A', 'B', 'C'];
    const excess = units.reduce((sum, unit) => sum + of(`${unit} emit`) - of(`${unit} receive`), 0);
    expect(Math.abs(excess)).toBeLessThan(ROUNDING);
    const sums = lines.map(
      (line, t) => of(`${line.emitter} emit`) + of(`${line.receiver} receive`) + round.solution.residuals[t]!,
    );
    sums.forEach((sum, t) => {
      expect(sum).toBeCloseTo(lines[t]!.levels[0]!, 12);
    });
    expect(value(round, 'A emit').status).toBe('datum');
  });

  it('projector, receiver and reversible unit: receive_H = (L_PH + L_TH − L_PT)/2', async () => {
    const lines = pairsOf({ 'P>H': -40, 'P>T': -44, 'T>H': -50 }, { u: 0.1 });
    const bench = await solved(lines, { model: 'directional', reversible: ['T'] });
    expect(value(bench, 'H receive').level).toBeCloseTo((-40 - 50 + 44) / 2, 12);
    expect(value(bench, 'H receive')).toMatchObject({ status: 'ok' });
    expect(value(bench, 'T').level).toBeCloseTo(-27, 12);
  });
});

describe('loose gains', () => {
  const session = (name: string, shift: number) =>
    pairsOf(TRIANGLE, { session: name, u: 0.1 }).map((line) => ({
      ...line,
      levels: [line.levels[0]! + shift, line.levels[0]! + shift - 3],
    }));
  const LOOSE = { ...RECIPROCAL, looseGain: true };

  it('of a single session is 0 dB by convention, and every response rests on that', async () => {
    const one = await solved(session('am', 0), LOOSE);
    expect(one.solution.gains).toMatchObject([{ value: 0, uncertainty: 0, status: 'datum' }]);
    expect(value(one, 'A')).toMatchObject({ status: 'datum' });
    expect(value(one, 'A').level).toBeCloseTo(-18.12, 12);
  });

  it('the first session is the datum, and a later one is found against it', async () => {
    const two = await solved([...session('am', 0), ...session('pm', 1)], LOOSE);
    expect(two.solution.gains.map(({ status }) => status)).toEqual(['datum', 'ok']);
    expect(two.solution.gains[1]!.value).toBeCloseTo(1, 12);
    // Six differences of 0.1 √2 each over two frequencies and three pairs: u² = 2 · 0.01 / 6.
    expect(two.solution.gains[1]!.uncertainty).toBeCloseTo(Math.sqrt(0.02 / 6), 12);
    expect(value(two, 'A').level).toBeCloseTo(-18.12, 12);
  });

  it('differences between units do not depend on which session comes first', async () => {
    const difference = (of: Awaited<ReturnType<typeof solved>>) => value(of, 'A').level - value(of, 'B').level;
    const [am, pm] = [session('am', 0), session('pm', 1)];
    const forth = await solved([...am, ...pm], LOOSE);
    const back = await solved([...pm, ...am], LOOSE);
    expect(difference(back)).toBeCloseTo(difference(forth), 12);
    expect(value(back, 'A').level - value(forth, 'A').level).toBeCloseTo(0.5, 12);
  });
});

describe('poor condition', () => {
  it.each([1e2, 1e4, 1e6, 1e7])(
    'three units of which one reading is %d times as uncertain: exact all the same',
    async (ratio) => {
      const u = [1, 1, ratio];
      const lines = pairsOf(TRIANGLE).map((line, t) => ({ ...line, u: u[t]! }));
      const { solution } = await solved(lines, RECIPROCAL);
      expect(solution.fallbacks).toBe(ratio > 2e3 ? 1 : 0);
      [-18.12, -23.25, -20.8].forEach((level, k) => {
        expect(solution.estimates[k]).toBeCloseTo(level, 12);
        expect(Math.abs(solution.uncertainty[k]! / (Math.hypot(...u) / 2) - 1)).toBeLessThan(1e-9);
      });
    },
  );
});
