import { describe, expect, test } from 'vitest';
import { decimalMarkOf, numberReader } from '../../src/readings/number-text.ts';

describe('numbers', () => {
  test.each([
    ['12', 12],
    [' -3.50 ', -3.5],
    ['+.5', 0.5],
    ['1e3', 1000],
    ['-1.5E-2', -0.015],
    ['\u22123.5', -3.5],
    ['1e\u22123', 0.001],
    ['0', 0],
    ['0.000', 0],
  ])('%s is read', (text, value) => {
    expect(numberReader(undefined).read(text)).toBe(value);
  });

  test.each([
    '',
    ' ',
    'NaN',
    'inf',
    'Infinity',
    '-Infinity',
    '1e999',
    '0x10',
    '0b1',
    '0o7',
    '1_000',
    '12 dB',
    '1,2,3',
    '--1',
    '1 000',
  ])('%s is no number', (text) => {
    expect(numberReader(undefined).read(text)).toBeNaN();
    expect(numberReader('.').read(text)).toBeNaN();
    expect(numberReader(',').read(text)).toBeNaN();
  });

  test('a decimal comma is read where the file has decimal commas', () => {
    const number = numberReader(',');
    expect(['-3,5', '\u22123,5', '1,5e3', '7', ',5'].map(number.read)).toEqual([-3.5, -3.5, 1500, 7, 0.5]);
  });

  test('the first number with a mark decides where nothing else does', () => {
    const comma = numberReader(undefined);
    expect(['7', '-3,5', '2.5'].map(comma.read)).toEqual([7, -3.5, Number.NaN]);
    const point = numberReader(undefined);
    expect(['7', '-3.5', '2,5'].map(point.read)).toEqual([7, -3.5, Number.NaN]);
  });

  test('grouped thousands are refused rather than read as something small', () => {
    expect(numberReader('.').read('1,000')).toBeNaN();
    expect(numberReader(',').read('1.000')).toBeNaN();
    expect(numberReader(',').read('1.000,5')).toBeNaN();
  });

  test('the reason tells a foreign decimal mark from a word and a blank', () => {
    expect(numberReader('.').whyNot('1,5')).toMatch(/decimal comma/);
    expect(numberReader(',').whyNot('1.5')).toMatch(/decimal point/);
    expect(numberReader('.').whyNot('loud')).toMatch(/not a finite number/);
    expect(numberReader('.').whyNot(' ')).toBe('blank');
  });
});

describe('decimal mark', () => {
  test('the mark that most numbers have wins, in the columns of numbers only', () => {
    const rows = [
      ['1.1', '100', '-3,5'],
      ['1.2', '200', '-3.5'],
      ['1.3', '300', '-4,5'],
    ];
    expect(decimalMarkOf(rows, [1, 2])).toBe(',');
    expect(decimalMarkOf(rows, [0, 1, 2])).toBe('.');
    expect(decimalMarkOf(rows, [1])).toBeUndefined();
  });
});
