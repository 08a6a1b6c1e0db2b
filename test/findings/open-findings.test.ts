import { describe, expect, it } from 'vitest';
import { THIRD_UNIT } from '../../src/findings/examination.ts';
import { openFindings } from '../../src/findings/open-findings.ts';
import { buildModel } from '../../src/model/build-model.ts';
import { findPatterns } from '../../src/model/find-patterns.ts';
import { DEFAULT_MODEL_OPTIONS, type ModelOptions } from '../../src/model/model-options.ts';
import { pairsOf, type TakeLine, takeSetOf } from '../take-set-of.ts';

const NONE = Number.NaN;
function open(lines: readonly TakeLine[], options: Partial<ModelOptions>, frequencies = [1000]) {
  const set = takeSetOf(frequencies, lines);
  const model = buildModel(set, { ...DEFAULT_MODEL_OPTIONS, ...options });
  return openFindings(set, model, findPatterns(set, model));
}
const cures = (lines: readonly TakeLine[], options: Partial<ModelOptions>, frequencies?: number[]) =>
  open(lines, options, frequencies).map(({ extraTakes }) =>
    extraTakes.map(({ emitter, receiver, path }) => `${emitter}>${receiver}${path === '' ? '' : ` ${path}`}`),
  );
const RECIPROCAL = { model: 'reciprocal' } as const;
const DIRECTIONAL = { model: 'directional' } as const;
const TRIANGLE = { 'A>B': 0, 'B>C': 0, 'A>C': 0 };

describe('what is open, reciprocal', () => {
  it('an even ring is reported as open, every unit of it is named by side, and one take within a side cures it', () => {
    const [finding] = open(pairsOf({ 'A>B': 0, 'B>C': 0, 'C>D': 0, 'A>D': 0 }), RECIPROCAL);
    expect(finding).toMatchObject({
      kind: 'no odd loop',
      status: 'open',
      responses: ['A', 'B', 'C', 'D'],
      sides: [
        ['A', 'C'],
        ['B', 'D'],
      ],
      extraTakes: [{ emitter: 'A', receiver: 'C', path: '' }],
      frequencies: [0],
    });
  });

  it('a solvable bench has nothing open', () => {
    expect(open(pairsOf(TRIANGLE), RECIPROCAL)).toEqual([]);
    expect(open([], RECIPROCAL)).toEqual([]);
  });

  it('a lone pair is tied to a solvable part by one take, else a third unit goes against both', () => {
    expect(cures(pairsOf({ 'D>E': 0, ...TRIANGLE }), RECIPROCAL)).toEqual([['D>A']]);
    expect(cures(pairsOf({ 'D>E': 0 }), RECIPROCAL)).toEqual([[`D>${THIRD_UNIT}`, `E>${THIRD_UNIT}`]]);
  });

  it('look-alikes are taken against each other, by their own names', () => {
    expect(cures(pairsOf({ 'A>C': 0, 'B>C': 0 }), { ...RECIPROCAL, lookalikes: [['A', 'B']] })).toEqual([['A>B']]);
  });

  it('never asks for a unit against itself in another mount', () => {
    const lines = ['bare', 'clamped'].map((emitterMount) => ({
      emitter: 'A',
      emitterMount,
      receiver: 'B',
      levels: [0],
    }));
    expect(cures(lines, RECIPROCAL)).toEqual([[`A@bare>${THIRD_UNIT}`, `B>${THIRD_UNIT}`]]);
  });

  it('a unit that was not measured where nothing else was either needs a triangle', () => {
    const lines = pairsOf(TRIANGLE).map((line) => ({ ...line, levels: [0, NONE] }));
    const findings = open(lines, RECIPROCAL, [1, 2]);
    expect(findings.map(({ kind, frequencies }) => [kind, frequencies])).toEqual([
      ['not measured', [1]],
      ['not measured', [1]],
      ['not measured', [1]],
    ]);
    expect(findings[0]!.extraTakes.map(({ emitter, receiver }) => emitter + receiver)).toEqual(['AB', 'AC', 'BC']);
  });

  it('a unit taken against itself elsewhere is taken so again', () => {
    const lines = [{ emitter: 'A', receiver: 'A', levels: [0, NONE] }];
    expect(cures(lines, RECIPROCAL, [1, 2])).toEqual([['A>A']]);
  });

  it('the same freedom at several frequencies is one finding, its frequencies ascending', () => {
    const lines = pairsOf(TRIANGLE).map((line, t) => ({
      ...line,
      levels: [t === 2 ? NONE : 0, 0, t === 2 ? NONE : 0],
    }));
    expect(open(lines, RECIPROCAL, [1, 2, 3]).map(({ frequencies }) => frequencies)).toEqual([[0, 2]]);
  });

  it('what rests on a convention comes after what is open', () => {
    const lines = [...pairsOf({ 'D>E': 0, 'E>F': 0 }), ...pairsOf({ 'X>X': 0 })];
    const balanced = open([...lines, { emitter: 'Y', receiver: 'X', levels: [NONE] }], {
      ...RECIPROCAL,
      datum: 'balanced',
    });
    expect(balanced.map(({ status }) => status)).toEqual(['open', 'datum']);
    expect(balanced[1]!.convention).toBe('mean(D, F) = mean(E)');
  });
});

describe('what is open, directional', () => {
  it('one constant of a connected bench rests on a convention, and no take can cure that', () => {
    const [finding] = open(pairsOf({ 'P>H': 0, 'P>I': 0 }), DIRECTIONAL);
    expect(finding).toMatchObject({ kind: 'one constant', status: 'datum', extraTakes: [] });
    expect(finding!.sides).toEqual([['P emit'], ['H receive', 'I receive']]);
  });

  it('two parts are tied together by one take, never by a unit against itself', () => {
    const lines = pairsOf({ 'A>B': 0, 'C>A': 0 });
    expect(cures(lines, DIRECTIONAL)).toEqual([['C>B'], ['C>B']]);
  });

  it('a response that was not measured is tied to the largest part', () => {
    const lines = [
      { emitter: 'A', receiver: 'B', levels: [NONE] },
      ...pairsOf({ 'C>B': 0 }),
      ...pairsOf({ 'D>E': 0, 'D>F': 0, 'G>F': 0 }),
    ];
    expect(cures(lines, DIRECTIONAL)[0]).toEqual(['A>F']);
  });
});

describe('what is open, paths', () => {
  const over = (path: string, pairs: Record<string, number>) => pairsOf(pairs, { path });

  it('a path that closes the odd loop is cured by a pair that was taken over another one, with its mount', () => {
    const lines = [
      ...over('p', { 'A>B': 0, 'B>C': 0 }).map((line) => ({
        ...line,
        emitterMount: line.emitter === 'A' ? 'bare' : '',
      })),
      { emitter: 'A', emitterMount: 'bare', receiver: 'C', path: 'q', levels: [0] },
    ];
    const path = open(lines, RECIPROCAL).find(({ kind, status }) => kind === 'path' && status === 'open')!;
    expect(path.extraTakes).toEqual([{ emitter: 'A@bare', receiver: 'B', path: 'q' }]);
    expect(path.sides).toBeUndefined();
  });

  it('the pair comes from the same stretch of the bench: another one would only move the trouble', () => {
    const lines = [...over('p', { 'A>B': 0 }), ...over('q', { 'C>D': 0 }), ...over('r', { 'D>E': 0 })];
    const path = open(lines, RECIPROCAL).find(({ kind, status }) => kind === 'path' && status === 'open')!;
    expect(path.extraTakes).toEqual([{ emitter: 'C', receiver: 'D', path: 'r' }]);
  });

  it('a path over which nothing was measured at some frequency is not measured, and not 0 dB', () => {
    const lines = [
      ...over('p', TRIANGLE).map((line) => ({ ...line, levels: [0, 0] })),
      { emitter: 'A', receiver: 'B', path: 'q', levels: [0, NONE] },
    ];
    const [first] = open(lines, RECIPROCAL, [1, 2]);
    expect(first).toMatchObject({ kind: 'not measured', status: 'open', responses: ['path q'], frequencies: [1] });
    expect(first!.extraTakes).toEqual([{ emitter: 'A', receiver: 'B', path: 'q' }]);
  });
});
