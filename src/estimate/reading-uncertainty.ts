import { InputError } from '../quantity/input-fault.ts';
import { noiseLevelPart } from '../takes/subtract-noise.ts';
import type { TakeSet } from '../takes/take-set.ts';
import { repeatScatter } from './repeat-scatter.ts';
import type { BandScatter, ReadingUncertainty } from './solution.ts';
import { thirdOctaves } from './third-octaves.ts';

/**
 * The standard uncertainty of every reading, from the first of these that is there: what the input tells of the reading
 * (`u_db`, or `averages` and `coherence`); repeats, pooled per third-octave band; one figure given by the user. Undefined
 * where there is none of them: then only the residuals can tell (see `solve`).
 * Where background noise was taken off a level, its part is in all of them.
 * @param given standard uncertainty of a reading in dB.
 * @throws InputError where some readings have a `u_db` and others have none from any source.
 */
export function readingUncertainty(set: TakeSet, given: number | undefined): ReadingUncertainty | undefined {
  const scatter = repeatScatter(set).filter((band) => band.dof > 0 && band.standardDeviation > 0);
  if (set.uncertainty !== undefined) return fromInput(set, set.uncertainty, scatter, given);
  if (scatter.length > 0) return fromRepeats(set, scatter, given);
  return given === undefined ? undefined : fromFigure(set, given);
}

const ORIGINS = {
  column: { source: 'column', words: 'in the input (u_db)' },
  averages: { source: 'averages', words: 'that averages and coherence leave' },
  both: { source: 'column', words: 'in the input (u_db), or else the one that averages and coherence leave' },
} as const;

function fromInput(
  set: TakeSet,
  column: Float64Array,
  scatter: readonly BandScatter[],
  given: number | undefined,
): ReadingUncertainty {
  const width = set.frequencies.length;
  const values = Float64Array.from(column);
  const instead = spread(set, perFrequency(set, scatter, given));
  let replaced = 0;
  let missing = 0;
  let firstMissing: number | undefined;
  for (let cell = 0; cell < values.length; cell++) {
    if (Number.isNaN(set.levels[cell]!) || !Number.isNaN(values[cell]!)) continue;
    values[cell] = instead[cell]!;
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
        place: { file: take.file, line: take.line, column: set.uncertaintyOrigin === 'averages' ? 'averages' : 'u_db' },
        found: `${missing} readings without an uncertainty, the first in the take ${take.emitter} > ${take.receiver}, beside readings with one`,
        expected: 'an uncertainty for every reading, or for none',
        remedy:
          set.uncertaintyOrigin === 'averages'
            ? 'Fill in averages (a coherence of 1 tells nothing), or give one figure for the rest with --u.'
            : 'Fill in u_db, take the column away, or give one figure for the rest with --u.',
      },
    ]);
  }
  const { source, words } = ORIGINS[set.uncertaintyOrigin ?? 'column'];
  return {
    source,
    statement:
      replaced === 0
        ? `The uncertainty of each reading is the one ${words}.`
        : `The uncertainty of each reading is the one ${words}; ${replaced} readings without one have ${scatter.length > 0 ? 'that of the repeats' : 'the figure given'}.`,
    values,
    dof: new Float64Array(width).fill(Number.POSITIVE_INFINITY),
    bands: [],
  };
}

function fromRepeats(set: TakeSet, scatter: readonly BandScatter[], given: number | undefined): ReadingUncertainty {
  const found = perFrequency(set, scatter, given);
  return {
    source: 'repeats',
    statement:
      'The uncertainty of a reading is the scatter of repeats, pooled per third-octave band; what a new mounting or another partner changes is not in it.',
    values: spread(set, found),
    dof: found.dof,
    bands: scatter,
  };
}

function fromFigure(set: TakeSet, given: number): ReadingUncertainty {
  const width = set.frequencies.length;
  return {
    source: 'given',
    statement: `The uncertainty of each reading is the figure given, ${given} dB.`,
    values: spread(set, { deviation: new Float64Array(width).fill(given), isRepeated: [] }),
    dof: new Float64Array(width).fill(Number.POSITIVE_INFINITY),
    bands: [],
  };
}

/** The same value for every reading of a frequency, but for what taking background noise off does to it. */
function spread(
  set: TakeSet,
  { deviation, isRepeated }: { readonly deviation: Float64Array; readonly isRepeated: readonly boolean[] },
): Float64Array {
  const width = set.frequencies.length;
  return set.levels.map((level, cell) => {
    if (Number.isNaN(level)) return Number.NaN;
    const f = cell % width;
    return deviation[f]! * (isRepeated[f] === true ? noiseOverRepeats(set, cell) : (set.noiseFactor?.[cell] ?? 1));
  });
}

/** Repeats are of corrected levels and show what noise does to them, but for the error of the noise level itself. */
export function noiseOverRepeats({ noiseFactor }: TakeSet, cell: number): number {
  return noiseFactor === undefined ? 1 : Math.hypot(1, noiseLevelPart(noiseFactor[cell]!));
}

// Bands without repeats take the figure given, or stay without an uncertainty.
function perFrequency(set: TakeSet, scatter: readonly BandScatter[], given: number | undefined) {
  const { bands, bandOf } = thirdOctaves(set.frequencies);
  const deviation = new Float64Array(bandOf.length).fill(given ?? Number.NaN);
  const dof = new Float64Array(bandOf.length).fill(given === undefined ? 0 : Number.POSITIVE_INFINITY);
  const isRepeated = new Array<boolean>(bandOf.length).fill(false);
  bandOf.forEach((b, f) => {
    const own = scatter.find((band) => band.from === bands[b]!.from);
    if (own === undefined) return;
    isRepeated[f] = true;
    deviation[f] = own.standardDeviation;
    dof[f] = own.dof;
  });
  return { deviation, dof, isRepeated };
}
