import { describe, expect, it } from 'vitest';
import { decimalPlaces, roundedText } from '../../src/quantity/rounding.ts';

describe('rounding to the uncertainty', () => {
  it.each([
    [0.35, 2],
    [0.0996, 2],
    [0.0994, 3],
    [0.1, 2],
    [1, 1],
    [0.996, 1],
    [9.96, 0],
    [12, 0],
    [340, 0],
    [1e-5, 6],
  ])('an uncertainty of %d keeps two digits at %d places', (uncertainty, places) => {
    expect(decimalPlaces(uncertainty)).toBe(places);
  });

  it.each([0, -1, Number.NaN, Number.POSITIVE_INFINITY])('an uncertainty of %d gives the fallback', (uncertainty) => {
    expect(decimalPlaces(uncertainty)).toBe(2);
    expect(decimalPlaces(uncertainty, 4)).toBe(4);
  });

  it('never writes a minus before zero', () => {
    expect(roundedText(-0.004, 0.1)).toBe('0.00');
    expect(roundedText(-0, Number.NaN)).toBe('0.00');
    expect(roundedText(-0.006, 0.1)).toBe('-0.01');
  });

  it('keeps the zeros that the uncertainty stands for', () => {
    expect(roundedText(-18.1, 0.35)).toBe('-18.10');
    expect(roundedText(1234.5, 120)).toBe('1235');
  });

  it('writes a value beside an uncertainty of rounding size', () => {
    expect(() => roundedText(-18.12, 1e-130)).not.toThrow();
  });
});
