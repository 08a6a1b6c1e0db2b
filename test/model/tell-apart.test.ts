import { describe, expect, it } from 'vitest';
import { buildModel } from '../../src/model/build-model.ts';
import { findPatterns } from '../../src/model/find-patterns.ts';
import { DEFAULT_MODEL_OPTIONS, type ModelOptions } from '../../src/model/model-options.ts';
import { pairsOf, type TakeLine, takeSetOf } from '../take-set-of.ts';

const NONE = Number.NaN;

function statuses(lines: readonly TakeLine[], options: Partial<ModelOptions>, frequencies = [1000]) {
  const set = takeSetOf(frequencies, lines);
  const model = buildModel(set, { ...DEFAULT_MODEL_OPTIONS, ...options });
  const { patterns, patternOf } = findPatterns(set, model);
  return {
    patterns,
    patternOf: [...patternOf],
    statusAt: (f: number) =>
      Object.fromEntries(
        model.links.map(({ name }, link) => [name, patterns[patternOf[f]!]!.separability.status[link]]),
      ),
    conventions: patterns.flatMap((pattern) => pattern.separability.directions.map((d) => d.convention)),
  };
}
const RECIPROCAL = { model: 'reciprocal' } as const;
const DIRECTIONAL = { model: 'directional' } as const;
const TRIANGLE = { 'A>B': 0, 'B>C': 0, 'A>C': 0 };
const EVEN_RING = { 'A>B': 0, 'B>C': 0, 'C>D': 0, 'A>D': 0 };

describe('what can be told apart, reciprocal', () => {
  it('three units in a triangle: all', () => {
    expect(statuses(pairsOf(TRIANGLE), RECIPROCAL).statusAt(0)).toEqual({ A: 'ok', B: 'ok', C: 'ok' });
  });

  it('an even ring is open, and every unit of it', () => {
    const { statusAt } = statuses(pairsOf(EVEN_RING), RECIPROCAL);
    expect(statusAt(0)).toEqual({ A: 'open', B: 'open', C: 'open', D: 'open' });
  });

  it('with the balanced datum an even ring rests on equal means of its two sides', () => {
    const { statusAt, conventions } = statuses(pairsOf(EVEN_RING), { ...RECIPROCAL, datum: 'balanced' });
    expect(statusAt(0)).toEqual({ A: 'datum', B: 'datum', C: 'datum', D: 'datum' });
    expect(conventions).toEqual(['mean(A, C) = mean(B, D)']);
  });

  it('disconnected parts are judged each for itself', () => {
    const { statusAt } = statuses(pairsOf({ ...TRIANGLE, 'D>E': 0 }), RECIPROCAL);
    expect(statusAt(0)).toEqual({ A: 'ok', B: 'ok', C: 'ok', D: 'open', E: 'open' });
  });

  it('one unit against itself is solved; a unit that was not measured is open, whatever the datum', () => {
    expect(statuses(pairsOf({ 'A>A': 0 }), RECIPROCAL).statusAt(0)).toEqual({ A: 'ok' });
    const gap = statuses(
      [
        { emitter: 'A', receiver: 'A', levels: [0] },
        { emitter: 'A', receiver: 'B', levels: [NONE] },
      ],
      {
        ...RECIPROCAL,
        datum: 'balanced',
      },
    );
    expect(gap.statusAt(0)).toEqual({ A: 'ok', B: 'open' });
  });

  it('a twin reading of declared look-alikes takes the place of an odd loop', () => {
    const open = statuses(pairsOf({ 'A>B': 0, 'A>C': 0 }), RECIPROCAL);
    expect(open.statusAt(0)).toEqual({ A: 'open', B: 'open', C: 'open' });
    const { statusAt } = statuses(pairsOf({ 'A>B': 0, 'A>C': 0 }), { ...RECIPROCAL, lookalikes: [['A', 'B']] });
    expect(statusAt(0)).toEqual({ 'A = B': 'ok', C: 'ok' });
  });

  it('decides per pattern of what was measured where', () => {
    const lines = [
      { emitter: 'A', receiver: 'B', levels: [0, 0, 0, NONE] },
      { emitter: 'B', receiver: 'C', levels: [0, 0, 0, NONE] },
      { emitter: 'A', receiver: 'C', levels: [0, NONE, 0, NONE] },
    ];
    const { patternOf, patterns, statusAt } = statuses(lines, RECIPROCAL, [1, 2, 3, 4]);
    expect(patternOf).toEqual([0, 1, 0, 2]);
    expect(patterns.map(({ frequencies, takes }) => [frequencies, takes])).toEqual([
      [
        [0, 2],
        [0, 1, 2],
      ],
      [[1], [0, 1]],
      [[3], []],
    ]);
    expect(statusAt(1)).toEqual({ A: 'open', B: 'open', C: 'open' });
  });

  it('a certificate closes an even ring, at its own frequencies only', () => {
    const reference = {
      unit: 'A',
      mount: '',
      role: 'both' as const,
      place: { file: 'refs.csv', line: 2 },
      frequency: Float64Array.of(1, 2),
      level: Float64Array.of(0, 0),
      uncertainty: Float64Array.of(0.1, 0.1),
    };
    const lines = pairsOf(EVEN_RING).map((line) => ({ ...line, levels: [0, 0, 0] }));
    const { statusAt, patternOf } = statuses(lines, { ...RECIPROCAL, references: [reference] }, [1, 2, 3]);
    expect(statusAt(1)).toEqual({ A: 'ok', B: 'ok', C: 'ok', D: 'ok' });
    expect(statusAt(2)).toEqual({ A: 'open', B: 'open', C: 'open', D: 'open' });
    expect(patternOf).toEqual([0, 0, 1]);
  });
});

describe('what can be told apart, directional', () => {
  it('one constant a connected part, fixed over the units that have both roles', () => {
    const { statusAt, conventions } = statuses(
      pairsOf({ 'A>B': 0, 'B>C': 0, 'C>A': 0, 'A>C': 0, 'C>B': 0 }),
      DIRECTIONAL,
    );
    expect(new Set(Object.values(statusAt(0)))).toEqual(new Set(['datum']));
    expect(conventions).toEqual(['mean(emit − receive) = 0 dB over A, B, C']);
  });

  it('without a unit in both roles the mean of the receivers is 0 dB', () => {
    const { conventions } = statuses(pairsOf({ 'P>H': 0, 'P>I': 0 }), DIRECTIONAL);
    expect(conventions).toEqual(['mean(receive) = 0 dB over H, I']);
  });

  it('of one emitter and one receiver only the sum is known: both are open', () => {
    expect(statuses(pairsOf({ 'P>H': 0 }), DIRECTIONAL).statusAt(0)).toEqual({ 'P emit': 'open', 'H receive': 'open' });
  });

  it('a projector, a receiver and a reversible unit are solved from three takes', () => {
    const { statusAt } = statuses(pairsOf({ 'P>H': 0, 'P>T': 0, 'T>H': 0 }), { ...DIRECTIONAL, reversible: ['T'] });
    expect(statusAt(0)).toEqual({ 'P emit': 'ok', 'H receive': 'ok', T: 'ok' });
  });

  it('a reversible unit among look-alikes makes them all reversible', () => {
    const { statusAt } = statuses(pairsOf({ 'P>H': 0, 'P>T': 0, 'S>H': 0 }), {
      ...DIRECTIONAL,
      reversible: ['T'],
      lookalikes: [['S', 'T']],
    });
    expect(statusAt(0)).toEqual({ 'P emit': 'ok', 'H receive': 'ok', 'T = S': 'ok' });
  });
});

describe('what can be told apart over several paths', () => {
  const over = (path: string, pairs: Record<string, number>) => pairsOf(pairs, { path });

  it('the first path is called 0 dB and everything rests on it', () => {
    const { statusAt, conventions } = statuses([...over('p', TRIANGLE), ...over('q', { 'A>B': 0 })], RECIPROCAL);
    expect(statusAt(0)).toEqual({ A: 'datum', B: 'datum', C: 'datum', 'path p': 'datum', 'path q': 'datum' });
    expect(conventions).toEqual(['path p = 0 dB']);
  });

  it('a path that only one pair went over, which closes the odd loop, cannot be told from the units', () => {
    const { statusAt } = statuses([...over('p', { 'A>B': 0, 'B>C': 0 }), ...over('q', { 'A>C': 0 })], RECIPROCAL);
    expect(statusAt(0)).toEqual({ A: 'open', B: 'open', C: 'open', 'path p': 'datum', 'path q': 'open' });
  });

  it('a path over which nothing was measured is open: no convention gives it a level', () => {
    const { statusAt } = statuses(
      [
        ...over('p', TRIANGLE).map((line) => ({ ...line, levels: [0, 0] })),
        { emitter: 'A', receiver: 'B', path: 'q', levels: [0, NONE] },
      ],
      RECIPROCAL,
      [1, 2],
    );
    expect(statusAt(0)['path q']).toBe('datum');
    expect(statusAt(1)['path q']).toBe('open');
  });

  it('a known path leaves nothing to convention', () => {
    const known = {
      path: 'p',
      place: { file: 'paths.csv', line: 2 },
      frequency: Float64Array.of(1000),
      level: Float64Array.of(-3),
      uncertainty: Float64Array.of(0.2),
    };
    const lines = [...over('p', TRIANGLE), ...over('q', { 'A>B': 0 })];
    const { statusAt } = statuses(lines, { ...RECIPROCAL, path: [known] });
    expect(statusAt(0)).toEqual({ A: 'ok', B: 'ok', C: 'ok', 'path p': 'ok', 'path q': 'ok' });
  });

  it('a reading whose exact path is unknown at its frequency does not count', () => {
    const exact = {
      path: 'p',
      place: { file: 'paths.csv', line: 2 },
      frequency: Float64Array.of(1, 2),
      level: Float64Array.of(-3, -3),
      uncertainty: Float64Array.of(NONE, NONE),
    };
    const lines = over('p', TRIANGLE).map((line) => ({ ...line, levels: [0, 0, 0] }));
    const { patterns, patternOf } = statuses(lines, { ...RECIPROCAL, path: [exact] }, [1, 2, 3]);
    expect(patternOf).toEqual([0, 0, 1]);
    expect(patterns[1]!.takes).toEqual([]);
  });
});
