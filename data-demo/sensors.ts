import { type RandomStream, randomStream } from '../src/numeric/random.ts';
import { type Mode, type ModeChange, modalLevel, UNCHANGED, underLoad } from './resonance.ts';

/** One of the ten contact sensors. */
export interface Sensor {
  readonly name: string;
  readonly modes: readonly Mode[];
  /** Decibels: what sets one sensor's sensitivity off from the next. */
  readonly sensitivity: number;
  /** How heavily it loads its partner, relative to the middle of the ten. */
  readonly loading: number;
}

/** One act of mounting a sensor: every mode moves a little, and the couplant film passes a little more or less. */
export interface Seating {
  /** One a mode. */
  readonly modes: readonly ModeChange[];
  /** Amplitudes in dB of the film's ripple: a constant, then cosine and sine pairs. */
  readonly film: readonly number[];
}

/** The sensor whose main resonance moves with what it is mounted against, and the mode concerned. */
export const SHIFTING = 'N07';
const SHIFTING_MODE: Mode = { frequency: 80_000, quality: 14, share: 0.2, pull: 0.036 };

/** Relative standard deviation, from seating to seating, of a mode's frequency and of its quality factor. */
const FREQUENCY_WANDER = 0.0022;
const QUALITY_WANDER = 0.025;
/** Standard deviation of the film's constant part and of each of its ripples, in dB. */
const FILM_CONSTANT = 0.05;
const FILM_RIPPLE = 0.085;
const FILM_RIPPLES = 4;
/** The longest ripple, in octaves: somewhat more than the whole range, so that its two ends are free of each other. */
const FILM_PERIOD = 6.5;
/** The ordinary pull of a partner on a mode: too little to show beside a new seating. */
const ORDINARY_PULL = 0.002;

/** Relative masses of the ten wear plates, about their mean. */
const LOADINGS = [-0.6, 0.9, -1.3, 1.4, -0.2, 1.1, 0, -1.5, 0.6, -0.4];

/** The ten sensors: one design with the spread of small-batch making. */
export function sensors(seed: number): Sensor[] {
  const stream = randomStream(seed, 0);
  const near = (value: number, spread: number) => value * (1 + spread * (2 * stream.uniform() - 1));
  return LOADINGS.map((loading, i) => {
    const name = `N${String(i + 1).padStart(2, '0')}`;
    // A broad body, on which the sharper resonances of plate and case ride.
    const modes: Mode[] = [
      { frequency: near(170_000, 0.06), quality: near(0.8, 0.1), share: 1, pull: ORDINARY_PULL },
      { frequency: near(33_000, 0.13), quality: near(4, 0.25), share: near(0.24, 0.35), pull: ORDINARY_PULL },
      { frequency: near(64_000, 0.13), quality: near(6, 0.25), share: near(0.2, 0.35), pull: ORDINARY_PULL },
      { frequency: near(152_000, 0.12), quality: near(6, 0.25), share: near(0.2, 0.35), pull: ORDINARY_PULL },
      { frequency: near(290_000, 0.1), quality: near(7, 0.25), share: near(0.08, 0.35), pull: ORDINARY_PULL },
    ];
    const sensitivity = 3.5 * (2 * stream.uniform() - 1);
    if (name === SHIFTING) modes[2] = SHIFTING_MODE;
    return { name, modes, sensitivity, loading };
  });
}

/** Draws the next seating of a sensor. */
export function seat(sensor: Sensor, stream: RandomStream): Seating {
  const modes = sensor.modes.map(() => ({
    frequency: 1 + FREQUENCY_WANDER * stream.normal(),
    quality: 1 + QUALITY_WANDER * stream.normal(),
  }));
  const film = [FILM_CONSTANT * stream.normal()];
  for (let k = 0; k < 2 * FILM_RIPPLES; k++) film.push(FILM_RIPPLE * stream.normal());
  return { modes, film };
}

/**
 * A sensor's own level in dB at `frequency` in hertz, without path and reciprocity parameter.
 * @param partner absent for the nominal loading.
 * @param seating absent for the nominal seating.
 */
export function ownLevel(sensor: Sensor, frequency: number, partner?: Sensor, seating?: Seating): number {
  const changes = sensor.modes.map((mode, k) => {
    const load = partner === undefined ? UNCHANGED : underLoad(mode, partner.loading);
    const own = seating?.modes[k] ?? UNCHANGED;
    return { frequency: load.frequency * own.frequency, quality: load.quality * own.quality };
  });
  const level = sensor.sensitivity + modalLevel(sensor.modes, changes, frequency);
  return seating === undefined ? level : level + filmLevel(seating.film, frequency);
}

function filmLevel(film: readonly number[], frequency: number): number {
  const turn = (2 * Math.PI * Math.log2(frequency / 10_000)) / FILM_PERIOD;
  let level = film[0]!;
  for (let k = 1; 2 * k < film.length; k++) {
    level += film[2 * k - 1]! * Math.cos(k * turn) + film[2 * k]! * Math.sin(k * turn);
  }
  return level;
}
