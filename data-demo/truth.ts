import { hertz } from '../src/quantity/frequency.ts';
import { bandHolding, bandsHolding, type OctaveBand } from '../src/quantity/octave-bands.ts';
import type { PlannedTake } from './schedule.ts';
import { ownLevel, type Seating, type Sensor, SHIFTING } from './sensors.ts';

/** What the notes say of a take; with the session, enough to know it by. */
export interface NotedTake {
  readonly emitter: string;
  readonly receiver: string;
  readonly session: string;
}

/** A take in which the gain was not where it should be. */
export interface MovedGain {
  readonly kind: 'moved gain';
  readonly noted: NotedTake;
  readonly gain_db: number;
}

/** A take that was made with another sensor than the notes say. */
export interface ExchangedLabel {
  readonly kind: 'exchanged label';
  readonly noted: NotedTake;
  readonly really: { readonly emitter: string; readonly receiver: string };
}

/** What the set is made from, and with what. */
export interface Making {
  /** Hertz. */
  readonly frequencies: readonly number[];
  readonly units: readonly Sensor[];
  readonly takes: readonly PlannedTake[];
  /** By sensor name. */
  readonly seatings: ReadonlyMap<string, readonly Seating[]>;
  /** What each sensor's response holds beside its own level, in dB. */
  readonly sharedHalf: (frequency: number) => number;
  /** Standard deviation in dB. */
  readonly repeatScatter: (frequency: number) => number;
  readonly exchanged: ExchangedLabel;
  readonly moved: MovedGain;
}

/** A partner scatter above this breaks mounting independence, in dB: the default tolerance of `solve`. */
const TOLERANCE = 1;

const DEFINITION =
  'Reciprocal model: level(A, B) = H(A) + H(B). level_db is H at the nominal loading and the nominal seating. It holds half of ' +
  "the block's level and half of the reciprocity parameter J = emit - receive, which pairs cannot tell from the sensors: " +
  'differences between sensors are free of both, the shape along frequency is not. No noise is in it.';

/** The record of `truth.json`: responses, scatters and planted facts. Scatters are standard deviations in dB. */
export function truthRecord(making: Making) {
  const { frequencies, units } = making;
  const shifting = units.find(({ name }) => name === SHIFTING)!;
  const ordinary = units.filter((unit) => unit !== shifting);
  const bands = bandsHolding(frequencies, 3).map((band) => {
    const own = frequencies.filter((frequency) => bandHolding(hertz(frequency), 3).index === band.index);
    return {
      band,
      record: {
        ...edges(band),
        repeat_db: rounded(rootMeanSquare(own.map(making.repeatScatter))),
        reseat_one_unit_db: rounded(rootMeanSquare(own.flatMap((f) => units.map((unit) => reseatAt(making, unit, f))))),
        partner_one_unit_db: rounded(rootMeanSquare(own.flatMap((f) => ordinary.map((u) => partnerAt(making, u, f))))),
        partner_shifting_unit_db: rounded(rootMeanSquare(own.map((f) => partnerAt(making, shifting, f)))),
      },
    };
  });
  const broken = bands.filter(({ record }) => record.partner_shifting_unit_db > TOLERANCE).map(({ band }) => band);
  const takeRecord = (noted: NotedTake) => {
    const index = making.takes.findIndex(
      (take) => take.emitter === noted.emitter && take.receiver === noted.receiver && take.session === noted.session,
    );
    return { take: `T${String(index + 1).padStart(3, '0')}`, first_line: 2 + index * frequencies.length, ...noted };
  };
  const { moved, exchanged } = making;
  return {
    about: 'What pairs.csv was made from. Invented throughout.',
    definition: DEFINITION,
    planted: [
      { kind: exchanged.kind, noted: takeRecord(exchanged.noted), really: exchanged.really },
      { kind: moved.kind, noted: takeRecord(moved.noted), gain_db: moved.gain_db },
      {
        kind: 'response depends on the partner',
        unit: SHIFTING,
        band_from_hz: edges(broken[0]!).band_from_hz,
        band_to_hz: edges(broken.at(-1)!).band_to_hz,
        criterion: `standard deviation over the partners above ${TOLERANCE} dB in each third-octave band`,
      },
    ],
    scatter: {
      meaning:
        'repeat: one reading, taken again as it sits (white). reseat: one unit mounted again; a pair has both, so 1.41 times as much. ' +
        'partner: one unit over its partners, of the ordinary nine and of the shifting one. Root mean square over the band.',
      bands: bands.map(({ record }) => record),
    },
    frequency_hz: frequencies,
    level_db: Object.fromEntries(
      units.map((unit) => [
        unit.name,
        frequencies.map((f) => Number((ownLevel(unit, f) + making.sharedHalf(f)).toFixed(3))),
      ]),
    ),
  };
}

function edges(band: OctaveBand) {
  return { band_from_hz: Number(band.from.toFixed(1)), band_to_hz: Number(band.to.toFixed(1)) };
}

function reseatAt({ seatings }: Making, unit: Sensor, frequency: number): number {
  const nominal = ownLevel(unit, frequency);
  return rootMeanSquare(
    seatings.get(unit.name)!.map((seating) => ownLevel(unit, frequency, undefined, seating) - nominal),
  );
}

/** Standard deviation of a unit's level over all its partners. */
function partnerAt({ units }: Making, unit: Sensor, frequency: number): number {
  const levels = units.filter((other) => other !== unit).map((partner) => ownLevel(unit, frequency, partner));
  const mean = levels.reduce((sum, level) => sum + level, 0) / levels.length;
  return Math.sqrt(levels.reduce((sum, level) => sum + (level - mean) ** 2, 0) / (levels.length - 1));
}

function rootMeanSquare(values: readonly number[]): number {
  return Math.sqrt(values.reduce((sum, value) => sum + value * value, 0) / values.length);
}

function rounded(value: number): number {
  return Number(value.toFixed(3));
}
