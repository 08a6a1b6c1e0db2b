import { InputError } from '../quantity/input-fault.ts';
import type { TakeSet } from '../takes/take-set.ts';
import { repeatScatter } from './repeat-scatter.ts';
import type { BandScatter, ReadingUncertainty } from './solution.ts';
import { thirdOctaves } from './third-octaves.ts';

/**
 * The standard uncertainty of every reading, from the first of these that is there: the input's own `u_db`; repeats,
 * pooled per third-octave band; one figure given by the user. Undefined where there is none of them: then only the
 * residuals can tell (see `solve`).
 * @param given standard uncertainty of a reading in dB.
 * @throws InputError where some readings have a `u_db` and others have none from any source.
 */
export function readingUncertainty(set: TakeSet, given: number | undefined): ReadingUncertainty | undefined {
  const scatter = repeatScatter(set).filter((band) => band.dof > 0 && band.standardDeviation > 0);
  if (set.uncertainty !== undefined) return fromColumn(set, set.uncertainty, scatter, given);
  if (scatter.length > 0) return fromRepeats(set, scatter, given);
  return given === undefined ? undefined : fromFigure(set, given);
}

function fromColumn(
  set: TakeSet,
  column: Float64Array,
  scatter: readonly BandScatter[],
  given: number | undefined,
): ReadingUncertainty {
  const width = set.frequencies.length;
  const values = Float64Array.from(column);
  const instead = perFrequency(set, scatter, given);
  let replaced = 0;
  let missing = 0;
  let firstMissing: number | undefined;
  for (let cell = 0; cell < values.length; cell++) {
    if (Number.isNaN(set.levels[cell]!) || !Number.isNaN(values[cell]!)) continue;
    values[cell] = instead.deviation[cell % width]!;
    replaced++;
    if (Number.isNaN(values[cell]!)) {
      missing++;
      firstMissing ??= cell;
    }
  }
  if (firstMissing !== undefined) {
    const take = set.takes[Math.floor(firstMissing / width)]!;
    throw new InputError([
      {
        place: { file: take.file, line: take.line, column: 'u_db' },
        found: `${missing} readings without an uncertainty, the first in the take ${take.emitter} > ${take.receiver}, beside readings with one`,
        expected: 'an uncertainty for every reading, or for none',
        remedy: 'Fill in u_db, take the column away, or give one figure for the rest with --u.',
      },
    ]);
  }
  return {
    source: 'column',
    statement:
      replaced === 0
        ? 'The uncertainty of each reading is the one in the input (u_db).'
        : `The uncertainty of each reading is the one in the input (u_db); ${replaced} readings without one have ${scatter.length > 0 ? 'that of the repeats' : 'the figure given'}.`,
    values,
    dof: new Float64Array(width).fill(Number.POSITIVE_INFINITY),
    bands: [],
  };
}

function fromRepeats(set: TakeSet, scatter: readonly BandScatter[], given: number | undefined): ReadingUncertainty {
  const { deviation, dof } = perFrequency(set, scatter, given);
  return {
    source: 'repeats',
    statement:
      'The uncertainty of a reading is the scatter of repeats, pooled per third-octave band; what a new mounting or another partner changes is not in it.',
    values: spread(set, deviation),
    dof,
    bands: scatter,
  };
}

function fromFigure(set: TakeSet, given: number): ReadingUncertainty {
  const width = set.frequencies.length;
  return {
    source: 'given',
    statement: `The uncertainty of each reading is the figure given, ${given} dB.`,
    values: spread(set, new Float64Array(width).fill(given)),
    dof: new Float64Array(width).fill(Number.POSITIVE_INFINITY),
    bands: [],
  };
}

/** The same value for every reading of a frequency. */
export function spread(set: TakeSet, deviation: Float64Array): Float64Array {
  const width = set.frequencies.length;
  return set.levels.map((level, cell) => (Number.isNaN(level) ? Number.NaN : deviation[cell % width]!));
}

// Bands without repeats take the figure given, or stay without an uncertainty.
function perFrequency(set: TakeSet, scatter: readonly BandScatter[], given: number | undefined) {
  const { bands, bandOf } = thirdOctaves(set.frequencies);
  const deviation = new Float64Array(bandOf.length).fill(given ?? Number.NaN);
  const dof = new Float64Array(bandOf.length).fill(given === undefined ? 0 : Number.POSITIVE_INFINITY);
  bandOf.forEach((b, f) => {
    const own = scatter.find((band) => band.from === bands[b]!.from);
    if (own === undefined) return;
    deviation[f] = own.standardDeviation;
    dof[f] = own.dof;
  });
  return { deviation, dof };
}
