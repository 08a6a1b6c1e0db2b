/** One mode of a contact sensor. */
export interface Mode {
  /** Hertz, at the nominal loading. */
  readonly frequency: number;
  /** Quality factor. */
  readonly quality: number;
  /** What the mode adds far below its frequency, as a signed amplitude ratio. */
  readonly share: number;
  /** Relative shift of the frequency per unit of the partner's loading. */
  readonly pull: number;
}

/** How one seating, and the partner, change one mode. */
export interface ModeChange {
  /** Factor on the frequency. */
  readonly frequency: number;
  /** Factor on the quality factor. */
  readonly quality: number;
}

export const UNCHANGED: ModeChange = { frequency: 1, quality: 1 };

/** A partner that loads a mode shifts it by `pull` and damps it by twice as much: the added mass also carries energy away. */
export function underLoad(mode: Mode, loading: number): ModeChange {
  return { frequency: 1 + mode.pull * loading, quality: 1 - 2 * Math.abs(mode.pull * loading) };
}

/**
 * Level in dB of a sum of damped modes at `frequency` in hertz: 20 lg |Σ share / (1 − x² + i x/Q)|, x = f / f₀.
 * Source: receptance of a damped structure by modal superposition, as in any textbook of vibration.
 * @param changes one a mode.
 */
export function modalLevel(modes: readonly Mode[], changes: readonly ModeChange[], frequency: number): number {
  let real = 0;
  let imaginary = 0;
  modes.forEach((mode, k) => {
    const change = changes[k] ?? UNCHANGED;
    const x = frequency / (mode.frequency * change.frequency);
    const stiffness = 1 - x * x;
    const damping = x / (mode.quality * change.quality);
    const scale = mode.share / (stiffness * stiffness + damping * damping);
    real += scale * stiffness;
    imaginary -= scale * damping;
  });
  return 10 * Math.log10(real * real + imaginary * imaginary);
}
