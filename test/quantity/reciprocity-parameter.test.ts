import { describe, expect, it } from 'vitest';
import { hertz } from '../../src/quantity/frequency.ts';
import {
  freeFieldParameter,
  rayleighWave,
  surfaceWaveParameter,
  transmittingConstant,
} from '../../src/quantity/reciprocity-parameter.ts';

const level = (ratio: number) => 20 * Math.log10(ratio);
/** The published figures carry six decimals. */
const PRINTED = 6;
/** The published figures carry ten digits, of which the last is rounded. */
const TEN_DIGITS = 6e-11;
const within = (value: number, expected: number, relative: number) =>
  expect(Math.abs(value / expected - 1), `${value} for ${expected}`).toBeLessThan(relative);

describe('free-field reciprocity parameter', () => {
  // Source: J = 2d/(ρ f), R. J. Bobber, Underwater Electroacoustic Measurements, 1970; figures computed from it.
  it('is 2 d / (ρ f)', () => {
    within(freeFieldParameter(1, 1000, hertz(1000)), 2e-6, 4 * Number.EPSILON);
    expect(level(freeFieldParameter(1, 1000, hertz(1000)))).toBeCloseTo(-113.9794, PRINTED);
    within(freeFieldParameter(1.5, 1000, hertz(20_000)), 1.5e-7, 4 * Number.EPSILON);
    expect(level(freeFieldParameter(1.5, 1000, hertz(20_000)))).toBeCloseTo(-136.478175, PRINTED);
  });

  // Source: the rule of thumb of underwater acoustics with its constant 354 for f in kHz, recalled from memory.
  it.each([
    [1000, 353.9794],
    [998.2, 353.963751],
    [1025, 354.193877],
    [1026, 354.202347],
  ])('gives the handbook constant of water of %d kg/m³, 60 dB more for f in kHz', (density, constant) => {
    expect(transmittingConstant(density) + 60).toBeCloseTo(constant, PRINTED);
  });

  it('turns −195 dB re 1 V/µPa at 20 kHz into 185 dB re 1 µPa·m/A in water of 1000 kg/m³', () => {
    expect(-195 + level(20_000) + transmittingConstant(1000)).toBeCloseTo(185, PRINTED);
  });

  it('refuses a distance, density or frequency that is not above 0, and names it', () => {
    expect(() => freeFieldParameter(0, 1000, hertz(1000))).toThrow(/distance must be above 0, not 0/);
    expect(() => freeFieldParameter(1, -1, hertz(1000))).toThrow(/density/);
    expect(() => freeFieldParameter(1, 1000, hertz(Number.NaN))).toThrow(/frequency/);
  });
});

describe('Rayleigh wave', () => {
  // Source: H. Lamb 1904, Phil. Trans. R. Soc. A 203, 1–42: 0.9194, 0.18349 and 0.12500 for Poisson's ratio 0.25.
  it("has Lamb's constants at Poisson's ratio 0.25", () => {
    const { speedRatio, vertical, horizontal } = rayleighWave(0.25);
    within(speedRatio, 0.9194016868, TEN_DIGITS);
    within(vertical, 0.1834862281, 3 * TEN_DIGITS);
    within(horizontal, 0.125, 100 * Number.EPSILON);
  });

  it.each([-0.99, -0.5, 0, 0.1, 0.25, 0.33, 0.45, 0.499])(
    "solves Rayleigh's cubic in the squared speed at Poisson's ratio %d",
    (poisson) => {
      // s³ − 8 s² + (24 − 16 q) s − 16 (1 − q) = 0 with s = (c_R/c_T)², q = (c_T/c_L)²: the equation squared out.
      const q = (1 - 2 * poisson) / (2 - 2 * poisson);
      const s = rayleighWave(poisson).speedRatio ** 2;
      // Terms of size 24 or less, each rounded a few times.
      expect(Math.abs(s ** 3 - 8 * s * s + (24 - 16 * q) * s - 16 * (1 - q))).toBeLessThan(24 * 20 * Number.EPSILON);
    },
  );

  it.each([-1, 0.5, 0.7, Number.NaN])('refuses the Poisson ratio %d, which no solid has', (poisson) => {
    expect(() => rayleighWave(poisson)).toThrow(RangeError);
  });
});

describe('surface-wave reciprocity parameter', () => {
  const steel = { density: 7800, shearSpeed: 3230, poissonRatio: 0.29 };
  /** The published figures carry nine digits, their inputs are exact. */
  const NINE_DIGITS = 6e-9;

  // Source: derived from Lamb 1904 and checked there against direct integration of the half-space solution.
  it('agrees with the steel example at 200 kHz', () => {
    within(rayleighWave(0.29).speedRatio * 3230, 2990.472793, NINE_DIGITS);
    within(rayleighWave(0.29).vertical, 0.1697038232, NINE_DIGITS);
    within(surfaceWaveParameter(0.1, steel, hertz(2e5)), 14755.4713, NINE_DIGITS);
    within(surfaceWaveParameter(0.2, steel, hertz(2e5)), 20867.3877, NINE_DIGITS);
    expect(level(surfaceWaveParameter(0.1, steel, hertz(2e5)))).toBeCloseTo(83.379062, 6);
    expect(level(surfaceWaveParameter(0.2, steel, hertz(2e5)))).toBeCloseTo(86.389362, 6);
  });

  it('grows with the root of the distance and falls with frequency to the power 3/2', () => {
    const at = (distance: number, frequency: number) => surfaceWaveParameter(distance, steel, hertz(frequency));
    within(at(0.4, 1e5) / at(0.1, 1e5), 2, 20 * Number.EPSILON);
    within(at(0.1, 1e5) / at(0.1, 4e5), 8, 20 * Number.EPSILON);
  });

  it('refuses what is not above 0', () => {
    expect(() => surfaceWaveParameter(0, steel, hertz(2e5))).toThrow(/distance/);
    expect(() => surfaceWaveParameter(0.1, { ...steel, shearSpeed: 0 }, hertz(2e5))).toThrow(/shearSpeed/);
  });
});
