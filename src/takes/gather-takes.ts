import { type FrequencyRange, frequencyText } from '../quantity/frequency.ts';
import { InputError, type InputFault } from '../quantity/input-fault.ts';
import type { Readings, UnusedRow } from '../readings/readings.ts';
import { averagedReadings, type UncertaintyOrigin } from './averaged-readings.ts';
import { type FrequencyTable, frequencyTable, SAME_FREQUENCY } from './frequency-table.ts';
import { type Spectrum, toOctaveBands, toPointsPerDecade } from './regrid.ts';
import { resolutionOf } from './resolution.ts';
import { only, subtractNoise } from './subtract-noise.ts';
import type { Grid, Take, TakeSet } from './take-set.ts';
import { type TakeSpectra, takeSpectra } from './take-spectra.ts';

export interface GatherOptions {
  readonly grid: Grid;
  /** Readings outside are left out; absent for all frequencies. */
  readonly band: FrequencyRange | undefined;
}

/** Largest takes × frequencies table: 64 Mi numbers, 512 MB. Beyond it the takes hardly share a frequency. */
const LARGEST_TABLE = 2 ** 26;

/**
 * Takes background noise off the levels, gives readings the uncertainty that averages and coherence tell, and brings all
 * takes to one frequency grid.
 * A frequency that comes twice in a take is an input fault, since nobody can tell which reading is meant.
 * Cost: linear in the readings.
 */
export function gatherTakes(readings: Readings, options: GatherOptions): TakeSet {
  const notices: string[] = [];
  const inBand = options.band === undefined ? readings : withinBand(readings, options.band, notices);
  refuseRepeatedFrequencies(inBand, takeSpectra(inBand), frequencyTable(inBand.frequency));
  const corrected = correctedReadings(inBand, notices);
  const takes = readings.takes.map((header, t): Take => ({ ...header, id: takeId(t, readings.takes.length) }));
  return options.grid.kind === 'as measured'
    ? asMeasured(corrected, takes, notices)
    : regridded(corrected, takes, options.grid, notices);
}

/** Readings as they are to be used, in the order of takes and frequencies. */
interface Corrected {
  readonly readings: Readings;
  readonly spectra: TakeSpectra;
  readonly origin: UncertaintyOrigin | undefined;
  readonly noiseFactor: Float64Array | undefined;
  readonly resolution: number | undefined;
  readonly unused: readonly UnusedRow[];
}

function correctedReadings(readings: Readings, notices: string[]): Corrected {
  const averaged = averagedReadings(readings);
  const { readings: used, factor, unused, notices: ofNoise } = subtractNoise(averaged.readings);
  notices.push(...averaged.notices, ...ofNoise);
  if (used.count === 0 && readings.count > 0) {
    throw new InputError([
      {
        place: { file: readings.files[0]?.name ?? 'input', column: 'noise_db' },
        found: 'no reading that stands 3 dB above its background noise',
        expected: 'levels above the noise',
        remedy: 'Check that `noise_db` is on the scale of the levels, or leave it out.',
      },
    ]);
  }
  const uncertainty = factor && used.uncertainty ? used.uncertainty.map((u, i) => u * factor[i]!) : used.uncertainty;
  return {
    readings: { ...used, uncertainty },
    spectra: takeSpectra(used),
    origin: averaged.origin,
    noiseFactor: factor,
    resolution: resolutionOf(readings.level),
    unused,
  };
}

function takeId(index: number, count: number): string {
  return `T${String(index + 1).padStart(Math.max(3, String(count).length), '0')}`;
}

export function withinBand(readings: Readings, band: FrequencyRange, notices: string[]): Readings {
  const keep: number[] = [];
  // 16.1 kHz is 16100.000000000002 Hz: the ends are included as a reader understands them.
  const [from, to] = [band.from * (1 - SAME_FREQUENCY), band.to * (1 + SAME_FREQUENCY)];
  for (let i = 0; i < readings.count; i++) {
    if (readings.frequency[i]! >= from && readings.frequency[i]! <= to) keep.push(i);
  }
  const range = `${frequencyText(band.from)} to ${frequencyText(band.to)}`;
  if (keep.length === 0) {
    throw new InputError([
      {
        place: { file: readings.files[0]?.name ?? 'input' },
        found: `no reading from ${range}`,
        expected: 'readings inside the chosen band',
        remedy: 'Choose a band that the files reach, or leave --band out.',
      },
    ]);
  }
  if (keep.length < readings.count) {
    notices.push(`${readings.count - keep.length} readings outside ${range} were left out, as --band asks.`);
  }
  return only(readings, keep);
}

function refuseRepeatedFrequencies(readings: Readings, spectra: TakeSpectra, table: FrequencyTable): void {
  const faults: InputFault[] = [];
  for (let t = 0; t < readings.takes.length; t++) {
    for (let k = spectra.start[t]! + 1; k < spectra.start[t + 1]!; k++) {
      const [before, at] = [spectra.order[k - 1]!, spectra.order[k]!];
      if (table.indexOf[before] !== table.indexOf[at]) continue;
      const { file, emitter, receiver } = readings.takes[t]!;
      faults.push({
        place: { file, line: readings.line[at]! },
        found: `${frequencyText(readings.frequency[at]!, 6)} a second time in the take ${emitter} > ${receiver} (first in line ${readings.line[before]!})`,
        expected: 'each frequency once in a take',
        remedy: 'If it was measured again, number the takes in a column `repeat`; if not, remove one of the two rows.',
      });
    }
  }
  if (faults.length > 0) throw new InputError(faults);
}

function asMeasured(
  { readings, spectra, origin, noiseFactor, resolution, unused }: Corrected,
  takes: readonly Take[],
  notices: string[],
): TakeSet {
  const table = frequencyTable(readings.frequency);
  const width = table.frequencies.length;
  refuseLargeTable(readings, takes.length * width);
  const spread = (values: Float64Array | undefined) => {
    if (values === undefined) return undefined;
    const matrix = new Float64Array(takes.length * width).fill(Number.NaN);
    for (let i = 0; i < readings.count; i++) matrix[readings.take[i]! * width + table.indexOf[i]!] = values[i]!;
    return matrix;
  };
  const shared = sharedFrequencies(readings, spectra, table);
  if (shared < width / 2) {
    notices.push(
      `Only ${shared} of ${width} frequencies are seen by more than half of the takes; --grid 1/12 or --grid DECADE/50 brings takes with different frequencies to one grid.`,
    );
  }
  return {
    takes,
    frequencies: table.frequencies,
    levels: spread(readings.level)!,
    uncertainty: spread(readings.uncertainty),
    uncertaintyOrigin: origin,
    noiseFactor: spread(noiseFactor),
    resolution,
    grid: { kind: 'as measured' },
    unused,
    notices,
  };
}

function sharedFrequencies(readings: Readings, spectra: TakeSpectra, table: FrequencyTable): number {
  const seen = new Int32Array(table.frequencies.length);
  for (let i = 0; i < readings.count; i++) seen[table.indexOf[i]!] = seen[table.indexOf[i]!]! + 1;
  const takesWithReadings = spectra.start.subarray(1).filter((end, t) => end > spectra.start[t]!).length;
  return seen.filter((count) => 2 * count > takesWithReadings || takesWithReadings <= 1).length;
}

function regridded(
  { readings, spectra, origin, noiseFactor, unused: tooNoisy }: Corrected,
  takes: readonly Take[],
  grid: Exclude<Grid, { kind: 'as measured' }>,
  notices: string[],
): TakeSet {
  const unused: UnusedRow[] = [...tooNoisy];
  const onGrid = (spectrum: Spectrum) =>
    grid.kind === 'octave bands' ? toOctaveBands(spectrum, grid.fraction) : toPointsPerDecade(spectrum, grid.points);
  const spectraOnGrid = takes.map((take, t) => {
    const own = spectra.order.subarray(spectra.start[t], spectra.start[t + 1]);
    const column = (values: Float64Array | undefined) =>
      Array.from(own, (i) => (values === undefined ? Number.NaN : values[i]!));
    const spectrum: Spectrum = {
      frequency: column(readings.frequency),
      level: column(readings.level),
      uncertainty: column(readings.uncertainty),
    };
    const result = onGrid(spectrum);
    if (result.empty > 0 || result.frequency.length === 0) {
      unused.push({
        file: take.file,
        line: take.line,
        column: 'frequency',
        value: `take ${take.id}, ${result.empty} points of the grid`,
        reason:
          grid.kind === 'octave bands'
            ? 'bands that the take does not fill are left empty: nothing is extrapolated'
            : 'points in a hole of the take are left empty: nothing is interpolated across it',
      });
    }
    // Equal uncertainties of 1 dB with the factors and without them show what the factors make of a grid point.
    const ones = spectrum.level.map(() => 1);
    const factor = noiseFactor && {
      with: onGrid({ ...spectrum, uncertainty: column(noiseFactor) }).uncertainty,
      without: onGrid({ ...spectrum, uncertainty: ones }).uncertainty,
    };
    return { ...result, factor: factor?.with.map((u, k) => u / factor.without[k]!) };
  });
  const table = frequencyTable(Float64Array.from(spectraOnGrid.flatMap((spectrum) => spectrum.frequency)));
  const width = table.frequencies.length;
  if (width === 0) {
    throw new InputError([
      {
        place: { file: readings.files[0]?.name ?? 'input' },
        found: 'no take that fills a single point of the chosen grid',
        expected: 'readings close enough for the grid',
        remedy: 'Choose a finer or another --grid, or leave it out.',
      },
    ]);
  }
  refuseLargeTable(readings, takes.length * width);
  const levels = new Float64Array(takes.length * width).fill(Number.NaN);
  const empty = () => new Float64Array(levels.length).fill(Number.NaN);
  const uncertainty = readings.uncertainty && empty();
  const factors = noiseFactor && empty();
  let next = 0;
  spectraOnGrid.forEach((spectrum, t) => {
    spectrum.level.forEach((level, k) => {
      const cell = t * width + table.indexOf[next++]!;
      levels[cell] = level;
      if (uncertainty !== undefined) uncertainty[cell] = spectrum.uncertainty[k]!;
      if (factors !== undefined) factors[cell] = spectrum.factor![k]!;
    });
  });
  return {
    takes,
    frequencies: table.frequencies,
    levels,
    uncertainty,
    uncertaintyOrigin: origin,
    noiseFactor: factors,
    grid,
    unused,
    notices,
  };
}

function refuseLargeTable(readings: Readings, cells: number): void {
  if (cells <= LARGEST_TABLE) return;
  throw new InputError([
    {
      place: { file: readings.files[0]?.name ?? 'input' },
      found: `${readings.count} readings of ${readings.takes.length} takes that hardly share a frequency`,
      expected: `at most ${LARGEST_TABLE} takes × frequencies`,
      remedy: 'Bring the takes to one grid with --grid 1/12 or --grid DECADE/50.',
    },
  ]);
}
