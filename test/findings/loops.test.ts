import { describe, expect, it } from 'vitest';
import { solve } from '../../src/estimate/solve.ts';
import { type LoopFinding, type LoopFindings, loopFindings } from '../../src/findings/loops.ts';
import { buildModel } from '../../src/model/build-model.ts';
import { DEFAULT_MODEL_OPTIONS, type ModelOptions } from '../../src/model/model-options.ts';
import { loopText } from '../../src/report/loops-table.ts';
import { pairsOf, type TakeLine, takeSetOf } from '../take-set-of.ts';

/** Rounding of levels below 100 dB, a dozen operations. */
const ROUNDING = 100 * 12 * Number.EPSILON;
const NONE = Number.NaN;

async function loopsOf(
  lines: readonly TakeLine[],
  { frequencies = [1000], given, ...options }: Partial<ModelOptions> & { frequencies?: number[]; given?: number } = {},
): Promise<LoopFindings> {
  const set = takeSetOf(frequencies, lines);
  const model = buildModel(set, { ...DEFAULT_MODEL_OPTIONS, model: 'reciprocal', ...options });
  return loopFindings(set, model, await solve(set, model, { givenUncertainty: given }));
}

const texts = ({ loops }: LoopFindings) => loops.map(({ chain }) => loopText(chain));
const only = ({ loops }: LoopFindings): LoopFinding => {
  expect(loops).toHaveLength(1);
  return loops[0]!;
};

/** The alternating sum worked out from the text of the loop and the levels by pair. */
function byHand(text: string, levels: Readonly<Record<string, number>>): number {
  return `+ ${text}`
    .split(/ ?([+-] (?:\d )?\S+>\S+)/)
    .filter((term) => term !== '')
    .reduce((sum, term) => {
      const [sign, ...rest] = term.split(' ');
      const [factor, pair] = rest.length === 2 ? [Number(rest[0]), rest[1]!] : [1, rest[0]!];
      return sum + (sign === '+' ? factor : -factor) * levels[pair]!;
    }, 0);
}

describe('loops of the reciprocal model', () => {
  /** Complete set of four: B. Griffing 1956, method 4; levels constructed, closures −86.0, −86.2 and −86.1 by hand. */
  it('four units, six pairs: two of the differences −0.2, −0.1 and +0.1 dB, each the sum that its text says', async () => {
    const levels = { '1>2': -40.2, '1>3': -38.9, '1>4': -45.1, '2>3': -41.0, '2>4': -47.3, '3>4': -45.8 };
    const found = await loopsOf(pairsOf(levels), { given: 0.05 });
    expect(found.loops).toHaveLength(2);
    const closures = found.loops.map(({ chain, bands: [band] }) => {
      expect(chain).toHaveLength(4);
      expect(Math.abs(band!.closure - byHand(loopText(chain), levels))).toBeLessThan(ROUNDING);
      expect(band!.uncertainty).toBeCloseTo(0.1, 12);
      return Math.abs(band!.closure).toFixed(9);
    });
    for (const closure of closures) expect(['0.100000000', '0.200000000']).toContain(closure);
    expect(new Set(texts(found)).size).toBe(2);
  });

  it('AA = 12, BB = 8, AB = 13: the middle pair is walked twice, −6 with u of √6 readings', async () => {
    const found = await loopsOf(pairsOf({ 'A>A': 12, 'A>B': 13, 'B>B': 8 }), { given: 0.5 });
    const { chain, bands } = only(found);
    expect(loopText(chain)).toBe('A>A - 2 A>B + B>B');
    expect(bands[0]!.closure).toBeCloseTo(-6, 12);
    expect(bands[0]!.uncertainty).toBeCloseTo(0.5 * Math.sqrt(6), 12);
    expect(bands[0]!.standardised).toBeCloseTo(-6 / (0.5 * Math.sqrt(6)), 12);
  });

  it('two triangles with a unit in common make a loop of six', async () => {
    const levels = { 'A>B': 1, 'B>C': 2, 'C>A': 4, 'C>D': 8, 'D>E': 16, 'E>C': 32 };
    const { chain, bands } = only(await loopsOf(pairsOf(levels)));
    expect(chain.map(({ factor }) => factor)).toEqual([1, 1, 1, 1, 1, 1]);
    // Twice C from either triangle: (B>C + C>A − A>B) − (C>D + E>C − D>E) = 5 − 24.
    expect(Math.abs(bands[0]!.closure)).toBeCloseTo(19, 12);
  });

  it('two triangles joined by a pair walk it twice, one triangle alone closes nothing', async () => {
    const triangle = { 'A>B': 1, 'B>C': 2, 'C>A': 4 };
    expect((await loopsOf(pairsOf(triangle))).loops).toEqual([]);
    const { chain, bands } = only(await loopsOf(pairsOf({ ...triangle, 'C>D': 64, 'D>E': 8, 'E>F': 16, 'F>D': 32 })));
    expect(chain.filter(({ factor }) => factor === 2).map(({ emitter, receiver }) => emitter + receiver)).toEqual([
      'CD',
    ]);
    // 2 C = 2 + 4 − 1, 2 D = 8 + 32 − 16, against 2 · 64.
    expect(Math.abs(bands[0]!.closure)).toBeCloseTo(128 - 5 - 24, 12);
  });

  it('repeats, seatings, directions and look-alikes of a pair are one mean, all takes alike', async () => {
    const square = { 'A>B': 10, 'B>C': 8, 'C>D': 5, 'D>A': 6 };
    const more = [
      ...pairsOf({ 'A>B': 13 }, { repeat: '2' }),
      ...pairsOf({ 'B>A': 16 }, { emitterSeating: '2' }),
      ...pairsOf({ 'X>B': 21 }),
    ];
    const found = await loopsOf(
      [...pairsOf(square), ...more].map((line) => ({ ...line, u: 0.5 })),
      { lookalikes: [['A', 'X']] },
    );
    const { chain, bands } = only(found);
    expect(loopText(chain)).toBe('A>B - B>C + C>D - D>A');
    expect(chain[0]!.takes).toEqual([0, 4, 5, 6]);
    expect(bands[0]!.closure).toBeCloseTo(15 - 8 + 5 - 6, 12);
    expect(bands[0]!.uncertainty).toBeCloseTo(0.5 * Math.sqrt(1 / 4 + 3), 12);
  });

  it('each of 190 pairs of 20 units beyond the 20 needed closes a loop of four', async () => {
    const names = Array.from({ length: 20 }, (_, k) => `U${k}`);
    const lines = names.flatMap((emitter, i) =>
      names.slice(i + 1).map((receiver): TakeLine => ({ emitter, receiver, levels: [0] })),
    );
    const { loops, leftOut, beyondLimit } = await loopsOf(lines);
    expect([loops.length, leftOut, beyondLimit]).toEqual([170, 0, 0]);
    expect(loops.every(({ chain }) => chain.length === 4)).toBe(true);
  });

  it('names mounts as units of their own', async () => {
    const bare = { emitterMount: 'bare' } as const;
    const lines = [...pairsOf({ 'A>B': 1, 'A>D': 2 }, bare), ...pairsOf({ 'C>B': 3, 'C>D': 4 })];
    expect(texts(await loopsOf(lines))).toEqual(['A@bare>B - A@bare>D + C>D - C>B']);
  });
});

describe('loops of the directional model', () => {
  it('three emitters and five receivers close eight loops of four', async () => {
    const lines = [0, 1, 2].flatMap((e) =>
      [0, 1, 2, 3, 4].map((r): TakeLine => ({ emitter: `E${e}`, receiver: `R${r}`, levels: [e * r] })),
    );
    const { loops } = await loopsOf(lines, { model: 'directional' });
    expect(loops).toHaveLength(8);
    for (const { chain } of loops) expect(chain).toHaveLength(4);
  });

  it('the two directions of a pair are two chains: a triangle both ways closes one loop of six', async () => {
    const lines = pairsOf({ 'A>B': 1, 'B>A': 2, 'B>C': 4, 'C>B': 8, 'C>A': 16, 'A>C': 32 });
    const { chain, bands } = only(await loopsOf(lines, { model: 'directional' }));
    expect(chain).toHaveLength(6);
    // (A>B + B>C + C>A) − (B>A + C>B + A>C).
    expect(Math.abs(bands[0]!.closure)).toBeCloseTo(Math.abs(1 + 4 + 16 - 2 - 8 - 32), 12);
  });
});

describe('paths and gains', () => {
  const over = (path: string, levels: Readonly<Record<string, number>>) => pairsOf(levels, { path });

  it('a loop goes over paths only so that they cancel', async () => {
    const lines = [...over('p', { 'A>B': 1, 'A>C': 2 }), ...over('q', { 'A>B': 4, 'A>C': 8 })];
    const { chain, bands } = only(await loopsOf(lines, { model: 'directional' }));
    expect(chain.map(({ path }) => path).sort()).toEqual(['p', 'p', 'q', 'q']);
    expect(Math.abs(bands[0]!.closure)).toBeCloseTo(3, 12);
    expect(loopText(chain)).toBe('A>B (p) - A>B (q) + A>C (q) - A>C (p)');
  });

  it('a ring of four over two paths that do not cancel closes nothing', async () => {
    const lines = [...over('p', { 'A>B': 1, 'B>C': 2, 'C>D': 4 }), ...over('q', { 'D>A': 8 })];
    const { loops, leftOut } = await loopsOf(lines);
    expect([loops.length, leftOut]).toEqual([0, 0]);
  });

  it('what cancels along no single walk is left out, and said so', async () => {
    const lines = [...over('p', { 'A>B': 1, 'C>D': 2 }), ...over('q', { 'A>B': 4, 'C>D': 8 })];
    const { loops, leftOut } = await loopsOf(lines, { model: 'directional' });
    expect([loops.length, leftOut]).toEqual([0, 1]);
  });

  it('a path that is ignored, or exactly known, ties nothing; its level is taken off', async () => {
    const lines = [...over('p', { 'A>B': 1, 'B>C': 2, 'C>D': 4 }), ...over('q', { 'D>A': 8 })];
    expect(only(await loopsOf(lines, { path: 'none' })).bands[0]!.closure).toBeCloseTo(1 - 2 + 4 - 8, 12);
    const level = (path: string, db: number) => ({
      path,
      place: { file: 'paths.csv' },
      frequency: Float64Array.of(500, 2000),
      level: Float64Array.of(db, db),
      uncertainty: Float64Array.of(NONE, NONE),
    });
    const known = only(await loopsOf(lines, { path: [level('p', 0), level('q', 3)] }));
    expect(known.bands[0]!.closure).toBeCloseTo(1 - 2 + 4 - (8 - 3), 12);
  });

  it('a loose gain has to cancel like a path, and the session is named', async () => {
    const round = (session: string, shift: number) =>
      pairsOf({ 'A>B': 1 + shift, 'B>C': 2 + shift, 'C>A': 4 + shift }, { session });
    const { loops, leftOut } = await loopsOf([...round('mon', 0), ...round('tue', 16)], { looseGain: true });
    expect(leftOut).toBe(0);
    // Six chains, three units, of the two gains only their difference shows.
    expect(loops).toHaveLength(2);
    for (const { chain, bands } of loops) {
      expect(new Set(chain.map(({ session }) => session))).toEqual(new Set(['mon', 'tue']));
      expect(Math.abs(bands[0]!.closure)).toBeLessThan(ROUNDING);
    }
  });
});

describe('bands', () => {
  const square = (levels: (k: number) => readonly number[]): TakeLine[] =>
    ['A>B', 'B>C', 'C>D', 'D>A'].map((pair, k) => {
      const [emitter, receiver] = pair.split('>') as [string, string];
      return { emitter, receiver, levels: levels(k) };
    });

  it('a closure is the mean over the frequencies of the band at which all four pairs were measured', async () => {
    const frequencies = [980, 1000, 1020, 2000, 4000];
    const lines = square((k) => [
      k === 0 ? 3 : 0,
      k === 0 ? 5 : 0,
      k === 2 ? NONE : 1,
      k === 1 ? NONE : 1,
      k === 3 ? 2 : 0,
    ]);
    const { bands } = only(await loopsOf(lines, { frequencies }));
    // Nothing closes at 2 kHz, and 1,020 Hz does not count.
    expect(bands.map(({ frequencies: count, closure }) => [count, closure])).toEqual([
      [2, 4],
      [1, -2],
    ]);
  });

  it('frequencies that all say the same are worth one: u does not shrink with their number', async () => {
    const frequencies = Array.from({ length: 9 }, (_, k) => 960 + 10 * k);
    const alike = square((k) => frequencies.map(() => (k === 0 ? 1 : 0)));
    const { bands } = only(await loopsOf(alike, { frequencies, given: 0.5 }));
    expect(bands[0]!.independent).toBeLessThan(1.01);
    expect(bands[0]!.uncertainty).toBeGreaterThan(0.99);
    // Residuals that change sign from one frequency to the next are independent as far as anybody can tell.
    const apart = square((k) => frequencies.map((_, f) => (k === 0 ? (-1) ** f : 0)));
    const [band] = only(await loopsOf(apart, { frequencies, given: 0.5 })).bands;
    expect(band!.independent).toBeCloseTo(9, 9);
    expect(band!.uncertainty).toBeCloseTo(1 / 3, 9);
  });

  it('without any uncertainty a closure stands alone, and the findings say what u would rest on', async () => {
    const additive = await loopsOf(square((k) => [[3, 5, 7, 5][k]!]));
    expect(only(additive).bands[0]).toMatchObject({ closure: 0, uncertainty: NONE, standardised: NONE });
    expect([additive.uncertaintyOf, additive.uncertaintySource]).toEqual(['as seated', 'none']);
  });
});
