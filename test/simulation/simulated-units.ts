import type { RandomStream } from '../../src/numeric/random.ts';

/** A resonance as a bell on a level over log frequency: `height` dB at its centre, and nothing far away from it. */
export interface Bell {
  /** Hertz. */
  readonly centre: number;
  readonly quality: number;
  /** Decibels; negative for a dip. */
  readonly height: number;
  /** Relative standard deviation of the centre over the partners; 0 for a resonance that holds. */
  readonly shift: number;
}

/** What sets one unit off from the next, in one role. */
export interface SimulatedResponse {
  /** Decibels at the middle of the range. */
  readonly base: number;
  /** Decibels per octave. */
  readonly slope: number;
  readonly bells: readonly Bell[];
}

/** How the resonances of a unit stand in one seating: factors on centre and quality, one a bell. */
export interface BellState {
  readonly centre: readonly number[];
  readonly quality: readonly number[];
}

/** Draws a response with three resonances that share the range out between them. */
export function drawResponse(stream: RandomStream, frequencies: Float64Array): SimulatedResponse {
  const octaves = Math.log2(frequencies.at(-1)! / frequencies[0]!);
  const bells = [0, 1, 2].map((k) => ({
    centre: frequencies[0]! * 2 ** ((octaves * (k + 0.15 + 0.7 * stream.uniform())) / 3),
    quality: 3 + 3 * stream.uniform(),
    height: 4 + 6 * stream.uniform(),
    shift: 0,
  }));
  return { base: -30 + 4 * stream.normal(), slope: 1.5 * stream.normal(), bells };
}

/** Draws how the resonances stand in a new seating. Deviations are relative. */
export function drawState(stream: RandomStream, bells: number, centreWander: number, qualityWander: number): BellState {
  const centre: number[] = [];
  const quality: number[] = [];
  for (let k = 0; k < bells; k++) {
    centre.push(1 + centreWander * stream.normal());
    quality.push(Math.exp(qualityWander * stream.normal()));
  }
  return { centre, quality };
}

/**
 * Level of a response in dB.
 * @param state absent for the nominal seating.
 * @param loading what the partner does to a resonance that shifts, in its standard deviations; 0 is nominal.
 */
export function levelOf(
  { base, slope, bells }: SimulatedResponse,
  frequencies: Float64Array,
  state: BellState | undefined,
  loading: number,
): Float64Array {
  const middle = Math.sqrt(frequencies[0]! * frequencies.at(-1)!);
  return Float64Array.from(frequencies, (frequency) => {
    let level = base + slope * Math.log2(frequency / middle);
    bells.forEach((bell, k) => {
      const centre = bell.centre * (state?.centre[k] ?? 1) * (1 + bell.shift * loading);
      level += bellLevel(frequency / centre, bell.quality * (state?.quality[k] ?? 1), bell.height);
    });
    return level;
  });
}

// A pole pair over a zero pair of the same frequency: |(1 − x² + i g x/Q) / (1 − x² + i x/Q)|², with g the height as a ratio.
function bellLevel(x: number, quality: number, height: number): number {
  const stiffness = (1 - x * x) ** 2;
  const damping = (x / quality) ** 2;
  const ratio = 10 ** (height / 10);
  return 10 * Math.log10((stiffness + ratio * damping) / (stiffness + damping));
}
