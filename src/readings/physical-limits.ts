/**
 * Bounds beyond which a number is a slip or a device's word for 'nothing', not a measurement. They lie far outside what
 * any bench gives, and keep what is computed from the numbers finite. All of them: common practice, no source.
 */

/** Decibels either way: an amplitude ratio of 10^50. Levels, gains and background noise. */
export const LARGEST_LEVEL = 1000;

/** Decibels. The least is the last digit that levels are written with. */
export const UNCERTAINTY_RANGE = { least: 1e-6, most: 1000 } as const;

/** Hertz. */
const FREQUENCY_RANGE = { least: 1e-6, most: 1e15 } as const;

const MOST_AVERAGES = 1e9;

/** Metres. */
const DISTANCE_RANGE = { least: 1e-9, most: 1e9 } as const;

/** Each of these says what is wrong with a number, or nothing at all. */
type Trouble = (value: number) => string;

const within = (value: number, { least, most }: { readonly least: number; readonly most: number }) =>
  value >= least && value <= most;

export const levelTrouble: Trouble = (level) =>
  Math.abs(level) <= LARGEST_LEVEL ? '' : `no level can lie beyond ${LARGEST_LEVEL} dB either way`;

export const uncertaintyTrouble: Trouble = (uncertainty) => {
  if (!(uncertainty > 0)) return 'a standard uncertainty must be above 0';
  const { least, most } = UNCERTAINTY_RANGE;
  return within(uncertainty, UNCERTAINTY_RANGE) ? '' : `a standard uncertainty must lie from ${least} dB to ${most} dB`;
};

export const frequencyTrouble: Trouble = (frequency) => {
  if (!(frequency > 0)) return 'a frequency must be above 0';
  const { least, most } = FREQUENCY_RANGE;
  return within(frequency, FREQUENCY_RANGE) ? '' : `a frequency must lie from ${least} Hz to ${most} Hz`;
};

export const averagesTrouble: Trouble = (averages) => {
  if (!(averages >= 1)) return 'the number of averages must be 1 or more';
  return averages <= MOST_AVERAGES ? '' : `the number of averages must not be above ${MOST_AVERAGES}`;
};

export const coherenceTrouble: Trouble = (coherence) =>
  coherence > 0 && coherence <= 1 ? '' : 'a coherence lies above 0 and not above 1';

export const distanceTrouble: Trouble = (distance) => {
  if (!(distance > 0)) return 'no length above 0';
  const { least, most } = DISTANCE_RANGE;
  return within(distance, DISTANCE_RANGE) ? '' : `no length from ${least} m to ${most} m`;
};
