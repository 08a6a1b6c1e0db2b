import type { Hertz } from './frequency.ts';
import { type Decibel, decibel } from './level.ts';

/**
 * Reciprocity parameter of a spherical wave in a free field, J = 2 d / (ρ f): receiving sensitivity (V/Pa) over
 * transmitting current response (Pa·m/A, brought to the distance d), in W/Pa².
 * Assumes a far field, without boundaries.
 * Source: R. J. Bobber, Underwater Electroacoustic Measurements, 1970; IEC 60565-1:2020 (formula recalled from memory).
 * @param distance metres.
 * @param density kg/m³.
 * @throws RangeError where one of the three is not above 0.
 */
export function freeFieldParameter(distance: number, density: number, frequency: Hertz): number {
  requireAbove0({ distance, density, frequency });
  return (2 * distance) / (density * frequency);
}

/** Decibels that lie between V/Pa and V/µPa, and between Pa and µPa: 20 lg 10⁶. */
const DECIBEL_PER_MICRO = 120;

/**
 * The constant of the handbooks: transmitting current response (dB re 1 µPa·m/A) = receiving sensitivity
 * (dB re 1 V/µPa) + 20 lg f + constant, with f in hertz; for f in kilohertz it is 60 dB more ("354").
 * It is the free-field parameter at 1 m and 1 Hz, on micropascals at both ends. With a voltage drive subtract 20 lg |Z|.
 * Source: as for the free-field parameter.
 * @param density kg/m³.
 * @throws RangeError where it is not above 0.
 */
export function transmittingConstant(density: number): Decibel {
  const parameter = freeFieldParameter(1, density, 1 as Hertz);
  return decibel(2 * DECIBEL_PER_MICRO - 20 * Math.log10(parameter));
}

/** A surface wave on a half-space. */
export interface RayleighWave {
  /** Speed over that of shear waves, c_R / c_T. */
  readonly speedRatio: number;
  /** Lamb's constant of the vertical displacement under a vertical force. */
  readonly vertical: number;
  /** Lamb's constant of the horizontal displacement under a vertical force. */
  readonly horizontal: number;
}

/** The root lies between the shear wave number and twice it for every solid: its speed ratio runs from 0.69 to 0.96. */
const LARGEST_WAVE_NUMBER = 2;
/** Newton's steps double the digits, a halving gains one bit of 53: more than this many are never needed. */
const MOST_STEPS = 100;

/**
 * The Rayleigh wave of a solid with a given Poisson's ratio: the root k of R(k) = (2k² − 1)² − 4k² a b with
 * a = √(k² − (c_T/c_L)²), b = √(k² − 1), in units of the shear wave number, and Lamb's constants K = −a / R′(k),
 * H = −k (2k² − 1 − 2ab) / R′(k).
 * Source: H. Lamb 1904, Phil. Trans. R. Soc. A 203, 1–42 (constants recalled from memory).
 * @throws RangeError where Poisson's ratio is not between −1 and 0.5: no elastic solid has it.
 */
export function rayleighWave(poissonRatio: number): RayleighWave {
  if (!(poissonRatio > -1 && poissonRatio < 0.5)) throw new RangeError(`Poisson's ratio ${poissonRatio}`);
  const slowness2 = (1 - 2 * poissonRatio) / (2 - 2 * poissonRatio);
  const k = rayleighRoot(slowness2);
  const { a, b, slope } = rayleighFunction(k, slowness2);
  return { speedRatio: 1 / k, vertical: -a / slope, horizontal: (-k * (2 * k * k - 1 - 2 * a * b)) / slope };
}

// Newton's method, kept inside a bracket that every step narrows: R falls from 1 at k = 1 to below 0.
function rayleighRoot(slowness2: number): number {
  let low = 1;
  let high = LARGEST_WAVE_NUMBER;
  let k = (low + high) / 2;
  for (let step = 0; step < MOST_STEPS; step++) {
    const { value, slope } = rayleighFunction(k, slowness2);
    if (value > 0) low = k;
    else high = k;
    const newton = k - value / slope;
    const next = newton > low && newton < high ? newton : (low + high) / 2;
    if (Math.abs(next - k) <= 2 * Number.EPSILON * k) return next;
    k = next;
  }
  return k;
}

function rayleighFunction(k: number, slowness2: number) {
  const a = Math.sqrt(k * k - slowness2);
  const b = Math.sqrt(k * k - 1);
  return {
    a,
    b,
    value: (2 * k * k - 1) ** 2 - 4 * k * k * a * b,
    slope: 8 * k * (2 * k * k - 1) - 8 * k * a * b - 4 * k ** 3 * (b / a + a / b),
  };
}

/** The solid that carries the waves between contact transducers. */
export interface Solid {
  /** kg/m³. */
  readonly density: number;
  /** Speed of shear waves in m/s. */
  readonly shearSpeed: number;
  readonly poissonRatio: number;
}

/**
 * Reciprocity parameter of contact transducers on the face of a half-space, in a Rayleigh-wave field, in N/(m/s):
 * velocity sensitivity over force per current. It is 1 over the vertical velocity that a unit vertical force makes at
 * the distance, |v/F| = ω k K |H₀(k r)| / (2 μ), with the far-field form |H₀(x)| = √(2/(π x)).
 * The far-field form is too large by 1/(16 (k r)²) of itself; body waves, which fall faster with distance, are left out
 * (about 0.5 % where the shear wave number times the distance is 80). Small contacts are assumed.
 * Source: Lamb as above; the use for reciprocity: H. Hatano and E. Mori 1976, J. Acoust. Soc. Jpn 32(4).
 * @param distance metres.
 * @throws RangeError where a value is not above 0, or Poisson's ratio is none.
 */
export function surfaceWaveParameter(distance: number, solid: Solid, frequency: Hertz): number {
  const { density, shearSpeed, poissonRatio } = solid;
  requireAbove0({ distance, density, shearSpeed, frequency });
  const { speedRatio, vertical } = rayleighWave(poissonRatio);
  const angular = 2 * Math.PI * frequency;
  const waveNumber = angular / (speedRatio * shearSpeed);
  const shearModulus = density * shearSpeed * shearSpeed;
  const spreading = Math.sqrt(2 / (Math.PI * waveNumber * distance));
  return (2 * shearModulus) / (angular * waveNumber * vertical * spreading);
}

function requireAbove0(values: Readonly<Record<string, number>>): void {
  for (const [name, value] of Object.entries(values)) {
    if (!(value > 0)) throw new RangeError(`the ${name} must be above 0, not ${value}`);
  }
}
