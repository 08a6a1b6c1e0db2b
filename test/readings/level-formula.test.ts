import { describe, expect, test } from 'vitest';
import { compileLevelFormula } from '../../src/readings/level-formula.ts';
import { faultsOf } from './memory-source.ts';

describe('formulas', () => {
  test('a formula is compiled once and names its columns in order', async () => {
    const formula = await compileLevelFormula('20*log10(Out_mV/in_mv) - gain_db + 20*log10(distance_m/0.05)');
    expect(formula.names).toEqual(['out_mv', 'in_mv', 'gain_db', 'distance_m']);
    expect(formula.level([100, 1, 6, 0.5])).toBeCloseTo(40 - 6 + 20, 12);
    expect(formula.level([10, 1, 0, 0.05])).toBeCloseTo(20, 12);
  });

  test('pi and e are no columns', async () => {
    const formula = await compileLevelFormula('pi*x + log(e)');
    expect(formula.names).toEqual(['x']);
    expect(formula.level([2])).toBeCloseTo(2 * Math.PI + 1, 12);
  });

  test.each([
    ['20*log10(', /cannot be read/],
    ['', /in the formula/],
    ['level_db = 3', /level_db = 3/],
    ['a; b', /a; b|in the formula/],
    ['[1, 2]', /\[1, 2\]/],
    ['"text"', /text/],
    ['true', /true/],
    ['f(x) = x', /f\(x\) = x/],
    ['level_db.x', /in the formula/],
  ])('`%s` is refused', async (text, words) => {
    const [fault] = await faultsOf(compileLevelFormula(text));
    expect(fault!.place.file).toBe('--level');
    expect(fault!.found).toMatch(words);
  });

  test.each([
    'import',
    'createUnit',
    'evaluate',
    'parse',
    'simplify',
    'derivative',
    'resolve',
    'config',
    'compile',
    'parser',
    'random',
    'constructor',
    'toString',
  ])('%s cannot be called', async (name) => {
    const [fault] = await faultsOf(compileLevelFormula(`1 + ${name}(x)`));
    expect(fault!.found).toMatch(new RegExp(`the function \`${name}\``));
  });

  test('a complex or an infinite result is not finite', async () => {
    expect((await compileLevelFormula('log10(x)')).level([-1])).toBeNaN();
    expect(Number.isFinite((await compileLevelFormula('1/x')).level([0]))).toBe(false);
    expect((await compileLevelFormula('x > 1')).level([2])).toBeNaN();
    expect((await compileLevelFormula('x > 1 ? 3 : 4')).level([2])).toBe(3);
  });
});
