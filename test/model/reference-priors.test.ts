import { describe, expect, it } from 'vitest';
import { buildModel } from '../../src/model/build-model.ts';
import { interpolateOverLog } from '../../src/model/interpolate.ts';
import { DEFAULT_MODEL_OPTIONS, type ModelOptions } from '../../src/model/model-options.ts';
import { InputError } from '../../src/quantity/input-fault.ts';
import { placeText } from '../../src/quantity/place.ts';
import type { Reference } from '../../src/readings/references.ts';
import { pairsOf, type TakeLine, takeSetOf } from '../take-set-of.ts';

const NONE = Number.NaN;
const FREQUENCIES = [100, 1000, 10_000];
const certificate = (unit: string, more: Partial<Reference> = {}): Reference => ({
  unit,
  mount: '',
  role: 'both',
  place: { file: 'refs.csv', line: 3 },
  frequency: Float64Array.of(100, 10_000),
  level: Float64Array.of(-10, -20),
  uncertainty: Float64Array.of(0.2, 0.4),
  ...more,
});
const LINES = pairsOf({ 'A>B': 0, 'B>A': 0, 'B>C': 0 });
const build = (references: readonly Reference[], options: Partial<ModelOptions>, lines: readonly TakeLine[] = LINES) =>
  buildModel(takeSetOf(FREQUENCIES, lines), { ...DEFAULT_MODEL_OPTIONS, ...options, references });
/** Names of the links that have a known value. */
const known = (references: readonly Reference[], options: Partial<ModelOptions>, lines?: readonly TakeLine[]) =>
  build(references, options, lines)
    .links.filter((link) => link.prior !== undefined)
    .map((link) => link.name);
function fault(references: readonly Reference[], options: Partial<ModelOptions>, lines?: readonly TakeLine[]): string {
  try {
    build(references, options, lines);
  } catch (error) {
    if (error instanceof InputError)
      return error.faults.map(({ place, found }) => `${placeText(place)}: ${found}`).join('\n');
    throw error;
  }
  return '';
}
const RECIPROCAL = { model: 'reciprocal' } as const;
const DIRECTIONAL = { model: 'directional' } as const;

describe('certificates', () => {
  it('give level and uncertainty, interpolated over log frequency', () => {
    const { value, uncertainty } = build([certificate('A')], RECIPROCAL).links[0]!.prior!;
    expect([...value]).toEqual([-10, -15, -20]);
    expect(uncertainty[1]).toBeCloseTo(0.3, 14);
  });

  it('give nothing beyond their ends', () => {
    const short = certificate('A', { frequency: Float64Array.of(500, 2000) });
    const { value, uncertainty } = build([short], RECIPROCAL).links[0]!.prior!;
    expect([value[0], value[2], uncertainty[0], uncertainty[2]]).toEqual([NONE, NONE, NONE, NONE]);
    expect(value[1]).toBeCloseTo(-15, 13);
  });

  it('of a role belong to that role; a unit with one role needs none named', () => {
    expect(known([certificate('A', { role: 'emit' })], DIRECTIONAL)).toEqual(['A emit']);
    expect(known([certificate('A', { role: 'receive' })], DIRECTIONAL)).toEqual(['A receive']);
    expect(known([certificate('C')], DIRECTIONAL)).toEqual(['C receive']);
  });

  it('of a reversible unit belong to its one response, with or without a role', () => {
    const options = { ...DIRECTIONAL, reversible: ['A'] };
    expect(known([certificate('A')], options)).toEqual(['A']);
    expect(known([certificate('A', { role: 'receive' })], options)).toEqual(['A']);
  });

  it('of a mount belong to that mount; with one mount none needs to be named', () => {
    const lines = [
      { emitter: 'A', emitterMount: 'bare', receiver: 'B', levels: [0, 0, 0] },
      { emitter: 'A', emitterMount: 'clamped', receiver: 'B', receiverMount: 'bare', levels: [0, 0, 0] },
    ];
    expect(known([certificate('A', { mount: 'clamped' })], RECIPROCAL, lines)).toEqual(['A@clamped']);
    expect(known([certificate('A')], RECIPROCAL, lines.slice(0, 1))).toEqual(['A@bare']);
    expect(fault([certificate('A')], RECIPROCAL, lines)).toContain(
      'refs.csv:3 mount: a reference for A without a mount',
    );
    expect(fault([certificate('A', { mount: 'backed' })], RECIPROCAL, lines)).toContain('A mounted backed');
  });

  it('two for one response are a fault, also where look-alikes have it together', () => {
    expect(fault([certificate('A'), certificate('A')], RECIPROCAL)).toContain('refs.csv:3 unit: a second certificate');
    const twins = { ...RECIPROCAL, lookalikes: [['A', 'C']] };
    expect(fault([certificate('A'), certificate('C')], twins)).toContain('second certificate for the response of C');
    expect(known([certificate('C')], twins)).toEqual(['A = C']);
  });

  it('that fit nothing in the takes are faults, all reported together', () => {
    const elsewhere = certificate('A', { frequency: Float64Array.of(1, 2) });
    const message = fault([certificate('X'), elsewhere, certificate('B', { role: 'emit' })], RECIPROCAL);
    expect(message.split('\n')).toHaveLength(3);
    expect(message).toContain('refs.csv:3 unit: the unit X, which no take names');
    expect(message).toMatch(/^refs\.csv:3 frequency_hz: .*reaches none of the frequencies/m);
    expect(message).toMatch(/^refs\.csv:3 role: .*role emit with the reciprocal model/m);
  });

  it('without a role, or with a role that the unit never has, are faults in the directional model', () => {
    expect(fault([certificate('A')], DIRECTIONAL)).toContain('without a role, while it both emits and receives');
    expect(fault([certificate('C', { role: 'emit' })], DIRECTIONAL)).toContain('C in the role emit');
  });
});

describe('interpolation over log frequency', () => {
  const table = [Float64Array.of(10, 100, 1000), Float64Array.of(0, 2, 0)] as const;
  const at = (...targets: number[]) => [...interpolateOverLog(...table, Float64Array.from(targets))];

  it('is exact at the entries, linear in the logarithm between them, and absent outside', () => {
    expect(at(9.99, 10, 100, 1000, 1000.1)).toEqual([NONE, 0, 2, 0, NONE]);
    expect(at(Math.sqrt(1000))[0]).toBeCloseTo(1, 14);
  });

  it('takes a frequency for the end of the table where only rounding lies between', () => {
    expect(at(10 * (1 - 1e-12), 1000 * (1 + 1e-12))).toEqual([0, 0]);
  });

  it('knows one entry at its own frequency only, and nothing from an empty table', () => {
    const one = interpolateOverLog(Float64Array.of(10), Float64Array.of(3), Float64Array.of(5, 10, 20));
    expect([...one]).toEqual([NONE, 3, NONE]);
    expect([...interpolateOverLog(new Float64Array(0), new Float64Array(0), Float64Array.of(1))]).toEqual([NONE]);
  });
});
