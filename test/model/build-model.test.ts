import { describe, expect, it } from 'vitest';
import { buildModel } from '../../src/model/build-model.ts';
import { DEFAULT_MODEL_OPTIONS, type ModelOptions } from '../../src/model/model-options.ts';
import { InputError } from '../../src/quantity/input-fault.ts';
import { pairsOf, type TakeLine, takeSetOf } from '../take-set-of.ts';

const NONE = Number.NaN;
const build = (lines: readonly TakeLine[], options: Partial<ModelOptions> = {}, frequencies = [1000]) =>
  buildModel(takeSetOf(frequencies, lines), { ...DEFAULT_MODEL_OPTIONS, ...options });
const names = (lines: readonly TakeLine[], options: Partial<ModelOptions> = {}) =>
  build(lines, options).links.map((link) => link.name);
/** Chains in words: `A + 2·B`. */
const chains = (lines: readonly TakeLine[], options: Partial<ModelOptions> = {}) => {
  const model = build(lines, options);
  return model.chains.map(({ links, factors }) =>
    links.map((link, k) => `${factors[k] === 1 ? '' : `${factors[k]}·`}${model.links[link]!.name}`).join(' + '),
  );
};
function faultsOf(run: () => unknown): string {
  try {
    run();
  } catch (error) {
    if (error instanceof InputError) return error.message;
    throw error;
  }
  return '';
}
const RECIPROCAL = { model: 'reciprocal' } as const;
const DIRECTIONAL = { model: 'directional' } as const;

describe('links and chains', () => {
  it('reciprocal: one response a unit, whatever its roles; a unit against itself counts twice', () => {
    expect(chains(pairsOf({ 'A>B': 0, 'B>A': 0, 'A>A': 0 }), RECIPROCAL)).toEqual(['A + B', 'B + A', '2·A']);
  });

  it('directional: one for each role that a unit has; against itself each once', () => {
    const lines = pairsOf({ 'A>B': 0, 'B>A': 0, 'A>A': 0 });
    expect(chains(lines, DIRECTIONAL)).toEqual(['A emit + B receive', 'B emit + A receive', 'A emit + A receive']);
  });

  it('a mount makes a response of its own', () => {
    const lines = [
      { emitter: 'A', emitterMount: 'bare', receiver: 'B', levels: [0] },
      { emitter: 'A', emitterMount: 'clamped', receiver: 'B', levels: [0] },
    ];
    expect(names(lines, RECIPROCAL)).toEqual(['A@bare', 'B', 'A@clamped']);
    expect(build(lines, RECIPROCAL).responses.map(({ unit, mount }) => [unit, mount])).toEqual([
      ['A', 'bare'],
      ['B', ''],
      ['A', 'clamped'],
    ]);
  });

  it('look-alikes share a link but are reported each; a reading between them counts it twice', () => {
    const lines = pairsOf({ 'A>B': 0, 'B>C': 0 });
    expect(chains(lines, { ...RECIPROCAL, lookalikes: [['A', 'B']] })).toEqual(['2·A = B', 'A = B + C']);
    const { responses } = build(lines, { ...RECIPROCAL, lookalikes: [['B', 'A']] });
    expect(responses.map(({ unit, link }) => [unit, link])).toEqual([
      ['A', 0],
      ['B', 0],
      ['C', 1],
    ]);
  });

  it('look-alike groups that share a member are joined', () => {
    const lines = pairsOf({ 'A>B': 0, 'C>D': 0 });
    const joined = names(lines, {
      ...RECIPROCAL,
      lookalikes: [
        ['C', 'B'],
        ['A', 'B'],
      ],
    });
    expect(joined).toEqual(['A = B = C', 'D']);
  });

  it('directional look-alikes share emit and receive, each for itself', () => {
    const lines = pairsOf({ 'A>B': 0, 'B>A': 0 });
    expect(chains(lines, { ...DIRECTIONAL, lookalikes: [['A', 'B']] })).toEqual([
      'A = B emit + A = B receive',
      'A = B emit + A = B receive',
    ]);
  });

  it('a reversible unit has one link, and both of its roles are reported', () => {
    const { responses, links } = build(pairsOf({ 'P>H': 0, 'P>T': 0 }), { ...DIRECTIONAL, reversible: ['T'] });
    expect(links.map((link) => link.name)).toEqual(['P emit', 'H receive', 'T']);
    expect(responses.filter(({ unit }) => unit === 'T').map(({ role, link }) => [role, link])).toEqual([
      ['emit', 2],
      ['receive', 2],
    ]);
  });

  it('a single path is part of every level; several are links; `none` ignores them', () => {
    const two = [...pairsOf({ 'A>B': 0 }, { path: 'p' }), ...pairsOf({ 'A>C': 0 }, { path: '' })];
    expect(names(two.slice(0, 1), RECIPROCAL)).toEqual(['A', 'B']);
    expect(chains(two, RECIPROCAL)).toEqual(['A + B + path p', 'A + C + path without a name']);
    expect(chains(two, { ...RECIPROCAL, path: 'none' })).toEqual(['A + B', 'A + C']);
  });

  it('loose gain: one constant a session, after the links of each frequency', () => {
    const lines = [...pairsOf({ 'A>B': 0 }, { session: 'am' }), ...pairsOf({ 'A>C': 0 }, { session: 'pm' })];
    const model = build(lines, { ...RECIPROCAL, looseGain: true });
    expect(model.links.map(({ name, scope }) => [name, scope])).toEqual([
      ['A', 'each frequency'],
      ['B', 'each frequency'],
      ['C', 'each frequency'],
      ['gain am', 'all frequencies'],
      ['gain pm', 'all frequencies'],
    ]);
    expect(model.linksPerFrequency).toBe(3);
    expect(chains(lines, { ...RECIPROCAL, looseGain: true })).toEqual(['A + B + gain am', 'A + C + gain pm']);
  });

  it('one unit alone and no takes at all are models too', () => {
    expect(names(pairsOf({ 'A>A': 0 }), RECIPROCAL)).toEqual(['A']);
    expect(names([], RECIPROCAL)).toEqual([]);
  });
});

describe('levels of paths', () => {
  const lines = [...pairsOf({ 'A>B': 0 }, { path: 'p' }), ...pairsOf({ 'A>C': 0 }, { path: 'q' })].map((line) => ({
    ...line,
    levels: [0, 0, 0],
  }));
  const table = (u: readonly number[]) => [
    {
      path: 'p',
      place: { file: 'paths.csv', line: 2 },
      frequency: Float64Array.of(100, 10_000),
      level: Float64Array.of(-2, -6),
      uncertainty: Float64Array.from(u),
    },
  ];

  it('with an uncertainty: a known link, between the ends of the table only', () => {
    const { links } = build(lines, { ...RECIPROCAL, path: table([0.1, 0.3]) }, [50, 100, 1000]);
    const prior = links.find((link) => link.name === 'path p')!.prior!;
    expect([...prior.value]).toEqual([NONE, -2, -4]);
    expect(prior.uncertainty[1]).toBe(0.1);
    expect(prior.uncertainty[2]).toBeCloseTo(0.2, 14);
    expect(links.find((link) => link.name === 'path q')!.prior).toBeUndefined();
  });

  it('without: an exactly known part of the chain, not known beyond the ends of the table', () => {
    const model = build(lines, { ...RECIPROCAL, path: table([NONE, NONE]) }, [50, 100, 1000]);
    expect(model.links.map((link) => link.name)).toEqual(['A', 'B', 'C', 'path q']);
    expect([...model.chains[0]!.known!]).toEqual([NONE, -2, -4]);
    expect(model.chains[1]!.known).toBeUndefined();
  });

  it('an uncertainty at some frequencies of a path and not at others is a fault', () => {
    expect(faultsOf(() => build(lines, { ...RECIPROCAL, path: table([NONE, 0.3]) }))).toContain('paths.csv:2 u_db');
  });

  it('levels for paths that no take names are a fault', () => {
    const unknown = [{ ...table([0.1, 0.1])[0]!, path: 'x' }];
    const message = faultsOf(() => build(lines, { ...RECIPROCAL, path: unknown }));
    expect(message).toContain('paths.csv:2 path: found levels for x');
    expect(message).toContain('levels for some of p, q');
  });
});

describe('options that do not fit the takes', () => {
  const lines = pairsOf({ 'A>B': 0, 'B>C': 0 });

  it('are reported all together', () => {
    const message = faultsOf(() =>
      build(lines, { ...DIRECTIONAL, reversible: ['X'], lookalikes: [['Y', 'A'], ['B']] }),
    );
    for (const part of ['the unit X', 'the unit Y', '"B"']) expect(message).toContain(part);
  });

  it('reversible units make no sense in the reciprocal model', () => {
    expect(faultsOf(() => build(lines, { ...RECIPROCAL, reversible: ['A'] }))).toContain('with the reciprocal model');
  });

  it('of many known units a message lists some and counts the rest', () => {
    const many = Array.from({ length: 20 }, (_, k) => ({ emitter: `U${k}`, receiver: `U${k + 1}`, levels: [0] }));
    expect(faultsOf(() => build(many, { ...DIRECTIONAL, reversible: ['X'] }))).toContain('U11 and 9 more');
  });
});
