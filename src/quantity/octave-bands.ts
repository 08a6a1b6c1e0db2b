import { type FrequencyRange, type Hertz, hertz } from './frequency.ts';

/** One fractional-octave band with its exact edges and mid-band frequency, in hertz. */
export interface OctaveBand extends FrequencyRange {
  /** The standard's running number x: 0 is the band at 1 kHz (or, for even fractions, just above it). */
  readonly index: number;
  readonly mid: Hertz;
}

/** Octave ratio, base ten. Source: IEC 61260-1:2014, equation 1. */
const OCTAVE_RATIO = 10 ** 0.3;
/** Reference frequency. Source: IEC 61260-1:2014, 5.2. */
const REFERENCE = 1000;

/** Exact mid-band frequency of band `index` for bands of 1/`fraction` octave. Source: IEC 61260-1:2014, equations 2 and 3. */
export function midBand(index: number, fraction: number): Hertz {
  const exponent = fraction % 2 === 1 ? index / fraction : (2 * index + 1) / (2 * fraction);
  return hertz(REFERENCE * OCTAVE_RATIO ** exponent);
}

// Edges are numbered rather than multiplied out from the mid-band, so that neighbours share them to the last bit.
function edge(number: number, fraction: number): Hertz {
  const exponent = fraction % 2 === 1 ? (2 * number - 1) / (2 * fraction) : number / fraction;
  return hertz(REFERENCE * OCTAVE_RATIO ** exponent);
}

/** Band `index` of 1/`fraction` octave. Source: IEC 61260-1:2014, equations 1 to 5. */
export function octaveBand(index: number, fraction: number): OctaveBand {
  return { index, from: edge(index, fraction), mid: midBand(index, fraction), to: edge(index + 1, fraction) };
}

/** The band that holds `frequency`; a frequency on an edge belongs to the upper band. */
export function bandHolding(frequency: Hertz, fraction: number): OctaveBand {
  const steps = (fraction * Math.log(frequency / REFERENCE)) / Math.log(OCTAVE_RATIO);
  const guess = Math.floor(fraction % 2 === 1 ? steps + 0.5 : steps);
  // One step to either side absorbs the rounding of the logarithm.
  for (const index of [guess + 1, guess, guess - 1]) {
    if (frequency >= edge(index, fraction)) return octaveBand(index, fraction);
  }
  return octaveBand(guess - 2, fraction);
}

/** All bands of 1/`fraction` octave that hold at least one of the frequencies, ascending. */
export function bandsHolding(frequencies: ArrayLike<number>, fraction: number): OctaveBand[] {
  const found = new Map<number, OctaveBand>();
  for (let f = 0; f < frequencies.length; f++) {
    const band = bandHolding(hertz(frequencies[f] as number), fraction);
    found.set(band.index, band);
  }
  return [...found.values()].sort((a, b) => a.index - b.index);
}

const THIRD_OCTAVE_NOMINAL = [1, 1.25, 1.6, 2, 2.5, 3.15, 4, 5, 6.3, 8];

/**
 * Nominal mid-band frequency, for labels only; computations use the exact one.
 * Source: IEC 61260-1:2014, annex E (the R10 series for octaves and third-octaves; for narrower bands three
 * significant digits where the first digit is 1 to 4, two where it is 5 to 9).
 */
export function nominalMidBand(index: number, fraction: number): Hertz {
  const exact = midBand(index, fraction);
  const decade = 10 ** Math.floor(Math.log10(exact * (1 + 1e-9)));
  const lead = exact / decade;
  if (fraction === 1 || fraction === 3) {
    const candidates = [...THIRD_OCTAVE_NOMINAL, 10];
    const nearest = candidates.reduce((best, value) =>
      Math.abs(Math.log(value / lead)) < Math.abs(Math.log(best / lead)) ? value : best,
    );
    return hertz(Number((nearest * decade).toPrecision(6)));
  }
  return hertz(Number(exact.toPrecision(lead < 5 ? 3 : 2)));
}
