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

describe('a comma before exactly three digits', () => {
  test.each(['1,000', '12,500', '-999,125', ' \u22121,000 '])(
    '%s is no number while nothing tells what it is',
    (text) => {
      const number = numberReader(undefined);
      expect(number.read(text)).toBeNaN();
      expect(number.whyNot(text)).toMatch(/may be a decimal comma or group thousands/);
      expect([number.read('2,5'), number.read(text)]).toEqual([2.5, numberReader(',').read(text)]);
      expect(numberReader(',').read(text)).not.toBeNaN();
    },
  );

  test.each([
    ['0,125', 0.125],
    ['1234,567', 1234.567],
    ['1,0000', 1],
    ['1,500e3', 1500],
    [',250', 0.25],
  ])('%s can only be a decimal comma', (text, value) => {
    expect(numberReader(undefined).read(text)).toBe(value);
  });

  test('decides nothing in a column of frequencies, and for the decimal comma in one of dB', () => {
    const rows = [
      ['1,000', '-41,250'],
      ['2,000', '-40,125'],
    ];
    expect(decimalMarkOf(rows, { numeric: [0, 1], decibels: [1] })).toEqual({ mark: ',', isAmbiguous: false });
    expect(decimalMarkOf(rows, { numeric: [0, 1], decibels: [] })).toEqual({ mark: undefined, isAmbiguous: true });
    const mixed = [...rows, ['3,000', '-40.5']];
    expect(decimalMarkOf(mixed, { numeric: [0, 1], decibels: [] })).toEqual({ mark: '.', isAmbiguous: false });
  });
});

describe('decimal mark', () => {
  test('the mark that most numbers have wins, in the columns of numbers only', () => {
    const rows = [
      ['1.1', '100', '-3,5'],
      ['1.2', '200', '-3.5'],
      ['1.3', '300', '-4,5'],
    ];
    const mark = (...numeric: number[]) => decimalMarkOf(rows, { numeric, decibels: [] });
    expect(mark(1, 2)).toEqual({ mark: ',', isAmbiguous: false });
    expect(mark(0, 1, 2)).toEqual({ mark: '.', isAmbiguous: false });
    expect(mark(1)).toEqual({ mark: undefined, isAmbiguous: false });
  });
});
